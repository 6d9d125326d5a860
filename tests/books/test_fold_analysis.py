"""A sample is analysed; the result counts once somebody accepts it."""

from datetime import UTC, datetime
from uuid import UUID

from chemicals.books.events import COMPUTED, UNACCOUNTED, VOLUME, Acceptance, Analysis, Event, Figure, Measured, Move
from chemicals.books.fold.state import NEGATIVE_CONTENT, TOO_MUCH, UNKNOWN_LEVEL, WAS_UNKNOWN
from tests.books.words import Books, G, L, bases, codes, grams, litres, moved, opening

SAMPLE = UUID("00000000-0000-4000-8000-00000000000a")


def found(grams_per_litre: int, sd: int = 0, component: str = "Cu") -> tuple[Event, Event]:
    """Return an analysis and its acceptance."""
    figure = Figure(grams_per_litre * G, sd * G, "titration")
    result = Measured(str(grams_per_litre), "g/L", grams_per_litre * G, sd * G)
    reported = datetime(2026, 3, 2, tzinfo=UTC)
    return (
        Analysis("bath", component, result, component, reported, figure),
        Acceptance(SAMPLE, "bath", component, figure),
    )


def test_an_analysis_posts_nothing() -> None:
    books = Books(opening("bath", litres(10), Cu=grams(500)))
    folded = books.record(found(45)[0])
    assert (folded.transfers, folded.findings, folded.contents) == ((), (), ())
    assert books.holds("bath", "Cu") == 500 * G


def test_accepted_the_content_is_concentration_times_volume() -> None:
    """45 g/L x 10 L = 450 g; 50 g are unaccounted."""
    books = Books(opening("bath", litres(10), Cu=grams(500)))
    folded = books.record(found(45)[1])
    assert books.holds("bath", "Cu") == 450 * G
    assert moved(folded, "Cu") == [("bath", UNACCOUNTED, 50 * G)]
    assert bases(folded, "Cu") == {COMPUTED}
    assert codes(folded) == set()


def test_more_than_the_books_is_found() -> None:
    books = Books(opening("bath", litres(10), Cu=grams(500)))
    folded = books.record(found(52)[1])
    assert moved(folded, "Cu") == [(UNACCOUNTED, "bath", 20 * G)]


def test_as_uncertain_as_concentration_and_volume() -> None:
    """45 +- 3 g/L x 10 +- 1 L: (3 x 10)^2 + (45 x 1)^2 = 900 + 2025 g^2; the difference also has the books' 10 g."""
    books = Books(opening("bath", litres(10, 1), Cu=grams(500, 10)))
    folded = books.record(found(45, 3)[1])
    variance = books.holding("bath", "Cu").variance
    assert abs(variance - 2925 * G**2) < 2 * 55 * G  # rounded up to a whole microgram of 54.08 g
    assert folded.transfers[0].sd == 55_000_001  # sqrt(2925 + 100) = 55 g, of a figure that was rounded up


def test_an_unknown_content_becomes_known() -> None:
    books = Books(opening("bath", litres(10), complete=False))
    folded = books.record(found(45)[1])
    assert books.holds("bath", "Cu") == 450 * G
    assert books.holds("bath", "Ag") is None  # nobody looked for silver
    assert codes(folded) == {WAS_UNKNOWN}


def test_what_went_out_of_an_unknown_content_is_found_with_the_next_analysis() -> None:
    """40 g went onto parts while the content was unknown; 450 g are there: 490 g had never been in the books."""
    books = Books(opening("bath", litres(10), complete=False))
    books.record(opening("bath", litres(10), complete=False))
    books.state.put("bath", "Cu", books.holding("bath", "Cu").rebooked(-40 * G, 0))
    books.posted["bath", "Cu"] = -40 * G
    folded = books.record(found(45)[1])
    assert moved(folded, "Cu") == [(UNACCOUNTED, "bath", 490 * G)]


def test_without_a_volume_there_is_no_content_to_set() -> None:
    books = Books(opening("bath", complete=False, Cu=grams(500)))
    folded = books.record(found(45)[1])
    assert folded.transfers == ()
    assert books.holds("bath", "Cu") == 500 * G
    assert codes(folded) == {UNKNOWN_LEVEL}


def test_an_analysis_of_an_empty_vessel_asks_for_the_level() -> None:
    books = Books(opening("bath"))
    assert codes(books.record(found(45)[1])) == {UNKNOWN_LEVEL}


def test_an_analysis_of_less_than_nothing_asks_for_the_level() -> None:
    books = Books(opening("bath", litres(10), Cu=grams(500)))
    folded = books.record(Move("bath", "drum", litres(12)))
    assert NEGATIVE_CONTENT in codes(folded)
    assert books.holds("bath", VOLUME) == -2 * L
    assert codes(books.record(found(45)[1])) == {UNKNOWN_LEVEL}
    assert books.holds("bath", "Cu") == 0


def test_a_result_in_the_wrong_unit_makes_the_content_unknown() -> None:
    """A million kilograms in a litre: the books do not believe it, and no longer believe themselves either."""
    books = Books(opening("bath", litres(10), Cu=grams(500)))
    folded = books.record(found(10**9)[1])
    assert folded.transfers == ()
    assert books.holds("bath", "Cu") is None
    assert [(finding.code, finding.source, finding.target) for finding in folded.findings] == [
        (TOO_MUCH, UNACCOUNTED, "bath")
    ]


def test_what_would_not_fit_is_not_believed_however_small_the_difference() -> None:
    """A million litres with a million kilograms in the books; 1.5 kg/L are found, which is more than they can hold."""
    books = Books(opening("bath", litres(10**6), Cu=grams(10**9)))
    folded = books.record(found(1500)[1])
    assert TOO_MUCH in codes(folded)
    assert books.holds("bath", "Cu") is None
