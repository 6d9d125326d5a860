"""The calculation `titration`: concentration and uncertainty of an analyte."""

from dataclasses import dataclass, fields
from typing import Annotated, Final

from chemicals.science import titration
from chemicals.science.calculation import (
    BASIS,
    Calculation,
    Check,
    Deviation,
    Output,
    deviation,
    group,
    quantity,
    text,
)
from chemicals.science.formula import BASIS as WEIGHTS
from chemicals.science.formula import Formula, parse_formula


@dataclass(frozen=True)
class TitrationDeviations:
    """Standard uncertainties of the inputs; what is left out counts as exact."""

    titrant: Annotated[
        Deviation | None, deviation("molar_concentration", "mol/L", "Uncertainty of the titrant", "0.0002 mol/L")
    ]
    titre: Annotated[Deviation | None, deviation("fraction", "1", "Uncertainty of the titre", "0.001")]
    volume: Annotated[Deviation | None, deviation("volume", "mL", "Uncertainty of the volume", "0.02 mL")]
    blank: Annotated[Deviation | None, deviation("volume", "mL", "Uncertainty of the blank", "0.02 mL")]
    sample: Annotated[Deviation | None, deviation("volume", "mL", "Uncertainty of the sample", "0.3 %")]
    mole_ratio: Annotated[Deviation | None, deviation("fraction", "1", "Uncertainty of the mole ratio", "0.01")]


@dataclass(frozen=True)
class TitrationInput:
    """A titration to its end point."""

    analyte: Annotated[Formula, text("Analyte", "Formula of what the concentration is told of.", "Cu", parse_formula)]
    titrant: Annotated[
        float,
        quantity("molar_concentration", "mol/L", "Titrant", "As labelled. A bare number is in mol/L.", "0.1 mol/L"),
    ]
    titre: Annotated[
        float,
        quantity("fraction", "1", "Titre", "True over labelled concentration of the titrant.", "0.995", default="1"),
    ]
    volume: Annotated[
        float,
        quantity(
            "volume", "mL", "Volume of titrant", "To the end point. A bare number is in mL.", "7.623 mL",
            above_zero=False,
        ),
    ]  # fmt: skip
    blank: Annotated[
        float,
        quantity(
            "volume", "mL", "Blank", "Titrant without a sample, or to the end point before. A bare number is in mL.",
            "0.05 mL", above_zero=False, default="0 mL",
        ),
    ]  # fmt: skip
    sample: Annotated[float, quantity("volume", "mL", "Sample", "Bath in the flask. A bare number is in mL.", "5 mL")]
    mole_ratio: Annotated[
        float, quantity("fraction", "1", "Mole ratio", "Moles of analyte per mole of titrant.", "0.5", default="1")
    ]
    sd: Annotated[
        TitrationDeviations,
        group(
            "Standard uncertainties",
            "What is left out counts as exact. With none at all, that of the result is unknown.",
            TitrationDeviations,
        ),
    ]


@dataclass(frozen=True)
class Contribution:
    """What one input adds to the uncertainty."""

    quantity: Annotated[str, Output("Input", "Its name.")]
    share: Annotated[float, Output("Share", "Of the variance of the result; together 1.")]


@dataclass(frozen=True)
class TitrationOutput:
    """The result and where its uncertainty comes from; unknown, and null, if no uncertainty was stated."""

    concentration_g_per_L: Annotated[float, Output("Concentration", "Of the analyte in the sample.", "g/L")]  # noqa: N815
    sd_g_per_L: Annotated[  # noqa: N815
        float | None, Output("Standard uncertainty", "Of the concentration, from those stated.", "g/L")
    ]
    budget: Annotated[list[Contribution], Output("Uncertainty budget", "Every input with a stated uncertainty.")]
    basis: Annotated[str, BASIS]


def _titration(given: TitrationInput) -> TitrationOutput:
    done = titration.Titration(
        given.titrant,
        given.titre,
        given.volume,
        given.blank,
        given.sample,
        given.mole_ratio,
        float(given.analyte.molar_mass),
    )
    stated = {field.name: getattr(given.sd, field.name) for field in fields(given.sd)}
    contributions = {
        name: steepness * stated[name].of(getattr(given, name))
        for name, steepness in done.sensitivities.items()
        if stated[name] is not None
    }
    sd, shares = titration.combine(contributions)
    return TitrationOutput(
        done.concentration_g_per_l,
        sd if contributions else None,
        [Contribution(name, share) for name, share in shares.items()],
        f"{titration.BASIS}; {WEIGHTS}",
    )


def _is_not_more(blank: float, volume: float) -> bool:
    return blank <= volume


TITRATION: Final = Calculation(
    "titration", "Titration", "Concentration of an analyte from the volume of titrant, and how sure it is.",
    TitrationInput, TitrationOutput, _titration,
    {
        "analyte": "Cu", "titrant": "0.1 mol/L", "titre": 0.995, "volume": "7.623 mL", "sample": "5 mL",
        "sd": {"titre": 0.001, "volume": "0.01 mL", "sample": "0.3 %"},
    },
    (Check(("blank", "volume"), _is_not_more, "The blank is more than the volume: write one that is not."),),
)  # fmt: skip
