"""A vessel was weighed, a density was read: the gross mass follows, and nothing else."""

from chemicals.books.events import (
    COMPUTED,
    GROSS_MASS,
    UNACCOUNTED,
    VOLUME,
    DensityReading,
    Figure,
    Measured,
    Reading,
    Result,
    WeightReading,
)
from chemicals.books.fold.state import TOO_MUCH, UNKNOWN_LEVEL, WAS_UNKNOWN, Finding
from tests.books.words import DENSE, KG, Books, G, L, bases, codes, grams, kilograms, litres, moved, opening


def weighed(mass: Measured) -> WeightReading:
    return WeightReading("drum", mass)


def as_dense_as(per_millilitre: str, sd: str | None = None) -> DensityReading:
    grams_per_ml = grams(per_millilitre, sd)
    return DensityReading("drum", Measured(per_millilitre, "g/mL", grams_per_ml.base, grams_per_ml.sd))


def a_drum(density: Figure = DENSE, sd: str | None = None) -> Books:
    """Return 10 L of 1.2 kg/L with 500 g of copper."""
    return Books(opening("drum", litres(10, sd), Cu=grams(500), density=density, poured=("salt/1",)))


def test_a_drum_that_weighs_less_lost_mass_that_nobody_explained() -> None:
    """12 kg by the books, 11.5 kg on the scales."""
    books = a_drum()
    folded = books.record(weighed(kilograms("11.5", "0.1")))
    assert moved(folded, GROSS_MASS) == [("drum", UNACCOUNTED, KG // 2)]
    assert bases(folded, GROSS_MASS) == {COMPUTED}
    assert books.holding("drum", GROSS_MASS).variance == (KG // 10) ** 2
    assert codes(folded) == set()


def test_nothing_but_the_mass_follows_from_a_weight() -> None:
    books = a_drum()
    folded = books.record(weighed(kilograms(13)))
    assert {transfer.component for transfer in folded.transfers} == {GROSS_MASS}
    assert (books.holds("drum", VOLUME), books.holds("drum", "Cu")) == (10 * L, 500 * G)
    assert books.remembers("drum") == {"salt/1"}


def test_an_unknown_mass_becomes_known_without_a_loss_or_a_gain() -> None:
    books = Books(opening("drum", litres(10), complete=False, density=None))
    folded = books.record(weighed(kilograms(12)))
    assert books.holds("drum", GROSS_MASS) == 12 * KG
    assert codes(folded) == {WAS_UNKNOWN}
    assert not books.is_complete("drum")


def test_a_weight_in_the_wrong_unit_is_told() -> None:
    assert TOO_MUCH in codes(a_drum().record(weighed(kilograms(2_000_000))))


def test_the_mass_is_density_times_volume() -> None:
    """10 L of 1.182 kg/L are 11.82 kg; the books had 12 kg."""
    books = a_drum()
    folded = books.record(as_dense_as("1.182"))
    assert books.holds("drum", GROSS_MASS) == 11_820_000_000
    assert moved(folded, GROSS_MASS) == [("drum", UNACCOUNTED, 180_000_000)]
    assert bases(folded, GROSS_MASS) == {COMPUTED}
    assert books.holds("drum", "Cu") == 500 * G


def test_the_mass_is_as_uncertain_as_the_volume_and_the_density() -> None:
    """10.0 +- 0.3 L of 1.00 +- 0.04 kg/L: 0.3^2 + 0.4^2 = 0.5^2 kg^2."""
    books = a_drum(sd="0.3")
    books.record(as_dense_as("1.00", "0.04"))
    assert books.holding("drum", GROSS_MASS).variance == (KG // 2) ** 2


def test_a_density_of_nothing_says_nothing() -> None:
    books = Books(opening("drum", mass=kilograms(12)))
    folded = books.record(as_dense_as("1.2"))
    assert codes(folded) == {UNKNOWN_LEVEL}
    assert books.holds("drum", GROSS_MASS) == 12 * KG


def test_without_a_volume_a_density_says_nothing_of_the_mass() -> None:
    books = Books(opening("drum", mass=kilograms(12), complete=False))
    folded = books.record(as_dense_as("1.2"))
    assert folded.transfers == ()
    assert folded.findings == (Finding(UNKNOWN_LEVEL, GROSS_MASS, "drum", UNACCOUNTED),)
    assert books.holds("drum", GROSS_MASS) == 12 * KG


def test_a_reading_of_anything_else_moves_nothing() -> None:
    books = a_drum()
    folded = books.record(Reading("drum", "pH", "", Result("4.2", "pH", 4_200, 4_200, 100)))
    assert (folded.transfers, folded.findings, folded.contents) == ((), (), ())
