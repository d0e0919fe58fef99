"""Kuiper, Watson and Rao together, with the p values that suit the readings: continuous or in classes."""

from __future__ import annotations

from dataclasses import dataclass

from fieldlog.science import classes, uniformity
from fieldlog.science.angles import Angles
from fieldlog.science.rao import rao_spacing


@dataclass(frozen=True)
class Omnibus:
    """Statistics are the plain ones of the angles as read. `refused` says why a p is missing."""

    kuiper: uniformity.Test
    watson: uniformity.Test
    rao: uniformity.Test
    classes: bool
    refused: str


def omnibus(units: Angles, width_deg: float | None, *, spacing: bool) -> Omnibus:
    """Omnibus tests of n directions in degrees; `width_deg` is the class width on the analysed circle."""
    kuiper, watson = uniformity.kuiper(units), uniformity.watson(units)
    many = None if width_deg is None else round(360.0 / width_deg)
    rao = rao_spacing(units, classes=many) if spacing else uniformity.NOT_GIVEN
    if width_deg is None or many is None or len(units) < uniformity.FEWEST_FOR_OMNIBUS:
        return Omnibus(kuiper, watson, rao, classes=False, refused="")
    if many < classes.FEWEST_CLASSES:
        bare = (uniformity.Test(test.statistic, None) for test in (kuiper, watson, rao))
        why = "Kuiper, Watson and Rao p are not given: the reading step leaves too few classes."
        return Omnibus(next(bare), next(bare), next(bare), classes=False, refused=why)
    refused = ""
    if many < 2 * len(units):
        refused = "Rao p is not given: so many readings in so few classes are mostly ties."
    counts = classes.class_counts(units, width_deg)
    if counts is None:
        return Omnibus(kuiper, watson, rao, classes=False, refused=refused)
    return Omnibus(
        uniformity.Test(kuiper.statistic, classes.kuiper_p(counts)),
        uniformity.Test(watson.statistic, classes.watson_p(counts)),
        rao,
        classes=True,
        refused=refused,
    )
