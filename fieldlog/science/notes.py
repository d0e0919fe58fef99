"""What was corrected, what could not be given and why: sentences beside the numbers."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from fieldlog.science.finding import counted, degrees

OF_AXES: Final = (
    "Axes: mean, median, SD, deviation and interval are halved back to axes; "
    "resultant length, variance, kappa and tests are on the doubled angles."
)


@dataclass(frozen=True)
class Circumstances:
    """What the notes need to know of a summary; sizes in degrees as shown."""

    readings: int
    bedforms: int | None
    fewest_bedforms: int
    axial: bool
    step_deg: float | None
    reduced: int
    unnamed: int
    without_mean: int
    identical: bool
    mean_exists: bool
    has_interval: bool
    outcome: str
    units: int
    fewest_for_modes: int
    needed: int | None
    classes: bool
    classes_refused: str


def notes(facts: Circumstances) -> list[str]:
    """The sentences, most important first."""
    if facts.readings == 0:
        return []
    said = [*_independence(facts), *_interval(facts), *_scale(facts), *_classes(facts)]
    if facts.reduced:
        said.append(f"{counted(facts.reduced, 'angle')} beyond 0 to 360 deg brought back to one turn.")
    if facts.needed is not None and facts.units < 20:
        unit = "reading" if facts.bedforms is None else "dune"
        said.append(
            f"The number needed rests on the spread of {counted(facts.units, unit)} and is itself uncertain; "
            "it is set so that about 4 surveys in 5 reach the target."
        )
    if 5 <= facts.units < facts.fewest_for_modes:
        unit = "readings" if facts.bedforms is None else "dunes"
        said.append(f"Modes are not sought in fewer than {facts.fewest_for_modes} {unit}.")
    return said


def _independence(facts: Circumstances) -> list[str]:
    if facts.bedforms is None:
        return ["Readings taken as independent."]
    said = [f"Mean, interval, tests and finding rest on {counted(facts.bedforms, 'dune')}, not on readings."]
    if facts.bedforms < facts.fewest_bedforms:
        said.append(f"Below {facts.fewest_bedforms} dunes no site interval is given.")
    if facts.unnamed:
        have = "reading has" if facts.unnamed == 1 else "readings have"
        said.append(f"{facts.unnamed} {have} no dune number: together they count as one dune.")
    if facts.without_mean:
        have = "dune has" if facts.without_mean == 1 else "dunes have"
        said.append(f"{facts.without_mean} {have} readings that cancel out, and so no mean: left out.")
    return said


def _interval(facts: Circumstances) -> list[str]:
    if facts.identical:
        mend = "" if facts.has_interval else " Check the instrument, or give the reading step."
        return [f"All directions are the same: kappa has no bound.{mend}"]
    if not facts.mean_exists:
        return ["The directions cancel out: there is no mean direction."]
    unit = "readings" if facts.bedforms is None else "dunes"
    if facts.units < 5:
        return [f"Interval and omnibus tests need at least 5 {unit}."]
    if facts.bedforms is not None and facts.bedforms < facts.fewest_bedforms:
        return []
    if facts.outcome != "one":
        return ["No interval of the mean, because the tests do not show one direction."]
    if not facts.has_interval:
        return [f"The {unit} are too spread for an interval of the mean."]
    return []


def _scale(facts: Circumstances) -> list[str]:
    if not facts.axial:
        return []
    return [OF_AXES]


def _classes(facts: Circumstances) -> list[str]:
    if not facts.step_deg:
        return []
    step = degrees(facts.step_deg)
    said = [f"Resultant length and spread are corrected for readings in {step} deg classes."]
    if facts.classes:
        said.append(f"Kuiper and Watson p are for readings in {step} deg classes.")
    if facts.classes_refused:
        said.append(facts.classes_refused)
    return said
