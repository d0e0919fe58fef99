"""Everything that is said about one sample, in one frozen record. Mirrored in static/js/science/summary.js."""

from __future__ import annotations

import math
from collections.abc import Hashable, Iterable, Sequence
from dataclasses import asdict, dataclass
from typing import Any, Final

import numpy as np

from fieldlog.science import bedforms as by_bedform
from fieldlog.science import classes, uniformity
from fieldlog.science.angles import Angles, SampleError, checked, reduced, reduced_one
from fieldlog.science.concentration import kappa_corrected, kappa_of
from fieldlog.science.finding import Facts, Pattern, decide, finding
from fieldlog.science.interval import OF_BEDFORMS, OF_READINGS, Interval, interval
from fieldlog.science.median import median_direction
from fieldlog.science.modes import FEWEST as FEWEST_FOR_MODES
from fieldlog.science.modes import Mode, find_modes
from fieldlog.science.moments import (
    NO_LENGTH,
    angular_deviation,
    circular_sd,
    grouping_factor,
    mean_and_length,
)
from fieldlog.science.needed import needed
from fieldlog.science.notes import Circumstances, notes
from fieldlog.science.rao import rao_spacing
from fieldlog.science.second_order import hotelling, moore
from fieldlog.science.walk import threshold

FEWEST_TO_SAY: Final = 5
"""Independent readings below which nothing is said about a direction."""


@dataclass(frozen=True)
class Description:
    """A sample described: degrees as shown (axes halved back), lengths and kappa as analysed."""

    n: int
    mean_direction_deg: float | None
    median_direction_deg: float | None
    resultant_length: float | None
    circular_variance: float | None
    circular_sd_deg: float | None
    angular_deviation_deg: float | None
    kappa: float | None
    kappa_corrected: float | None
    rayleigh_z: float | None
    rayleigh_p: float | None


@dataclass(frozen=True)
class SecondOrder:
    """Tests of the bedforms' mean vectors, beside the Rayleigh test of their unit vectors."""

    hotelling_f: float | None
    hotelling_p: float | None
    moore_r: float | None
    moore_p: float | None


@dataclass(frozen=True)
class Summary:
    """Field names are the keys of `ergbook stats --json`.

    With bedforms every number rests on the bedforms' mean directions, except `n` (readings),
    `within_bedform_sd_deg` and `by_readings`. A value that does not exist is None, with the reason
    in `notes`. `readings_needed` and `bedforms_needed` are totals, those taken included.
    `threshold_resultant` is the resultant length that the Rayleigh test needs at 5 %.
    """

    n: int
    axial: bool
    mean_direction_deg: float | None
    median_direction_deg: float | None
    resultant_length: float | None
    circular_variance: float | None
    circular_sd_deg: float | None
    angular_deviation_deg: float | None
    kappa: float | None
    kappa_corrected: float | None
    ci95_low_deg: float | None
    ci95_high_deg: float | None
    ci_method: str | None
    rayleigh_z: float | None
    rayleigh_p: float | None
    v_u: float | None
    v_p: float | None
    kuiper_v: float | None
    kuiper_p: float | None
    watson_u2: float | None
    watson_p: float | None
    rao_u_deg: float | None
    rao_p: float | None
    modes: list[Mode]
    readings_needed: int | None
    bedforms: int | None
    between_bedform_sd_deg: float | None
    within_bedform_sd_deg: float | None
    bedforms_needed: int | None
    outcome: str
    finding: str
    notes: list[str]
    target_deg: float | None
    enough: bool | None
    threshold_resultant: float | None
    ci95_half_width_deg: float | None
    doubled_p: float | None
    trebled_p: float | None
    bedform_means_deg: list[float] | None
    by_readings: Description | None
    second_order: SecondOrder | None

    def as_json(self) -> dict[str, Any]:
        """Plain values, in the order of the fields."""
        return asdict(self)


def summarise(
    angles_deg: Iterable[float],
    *,
    bedforms: Sequence[Hashable] | None = None,
    axial: bool = False,
    step_deg: float | None = None,
    against_deg: float | None = None,
    target_deg: float | None = None,
    fewest_bedforms: int = 5,
    subject: str = "readings",
    spacing: bool = True,
) -> Summary:
    """Describe and judge one sample of directions, or of axes.

    `angles_deg`: degrees, any turn, shape (n,). `bedforms`: a name per reading, or None for a
    reading without one; None (or all None) takes readings as independent. `axial`: angles are axes;
    they are doubled, analysed and halved back. `step_deg`: what bearings were read to. `against_deg`:
    the direction the V test asks about. `target_deg`: the half-width wanted. `fewest_bedforms`:
    below it no interval and never "enough". `subject` begins the finding ("Slip faces", "Crests").
    `spacing`: whether to give Rao's p, which costs a simulation.

    Raises SampleError for what is not a finite number and for lists of different lengths. Every
    degenerate sample has a summary: None for what does not exist, and a sentence why.

    Formulas are named in the modules that hold them.

    >>> s = summarise([45, 55, 81, 96, 110, 117, 132, 154])
    >>> s.finding
    'Readings point towards 99 +/- 36 deg: 8 readings, one direction.'
    """
    raw = checked(angles_deg)
    for name, value in (("step", step_deg), ("target", target_deg)):
        if value is not None and not (math.isfinite(value) and 0 < value <= 90):
            raise SampleError(f"{value} is no {name} in degrees", name, "Give a number above 0 and at most 90.")
    if against_deg is not None and not math.isfinite(against_deg):
        raise SampleError(f"{against_deg} is not a direction", "against", "Give degrees as a number.")
    if bedforms is not None and len(bedforms) != len(raw):
        raise SampleError(
            f"{len(raw)} readings and {len(bedforms)} bedforms", "bedforms", "Give one bedform per reading."
        )
    if bedforms is not None and all(name is None for name in bedforms):
        bedforms = None
    return _Sample(raw, bedforms, axial, step_deg, fewest_bedforms).summary(
        against_deg, target_deg, subject, spacing=spacing
    )


class _Sample:
    """The sample on the circle that is analysed, and the directions that count as independent."""

    def __init__(
        self, raw: Angles, names: Sequence[Hashable] | None, axial: bool, step_deg: float | None, fewest: int
    ) -> None:
        self.fold = 2 if axial else 1
        self.axial = axial
        self.step_deg = step_deg
        self.width_deg = None if step_deg is None else step_deg * self.fold
        self.beyond = int(np.count_nonzero((raw < 0) | (raw >= 360) & (raw != 360)))
        self.angles = reduced(raw * self.fold) if axial or self.beyond else np.where(raw == 360, 0.0, raw)
        self.groups = None if names is None else by_bedform.gather(self.angles, names)
        self.unnamed = 0 if names is None else sum(name is None for name in names)
        self.units = self.angles if self.groups is None else self.groups.means_deg
        self.fewest = FEWEST_TO_SAY if self.groups is None else max(fewest, 1)
        self.factor = 1.0 if self.width_deg is None else grouping_factor(self.width_deg)

    def shown(self, angle_deg: float | None) -> float | None:
        """A direction on the analysed circle as it is shown."""
        return None if angle_deg is None else reduced_one(angle_deg / self.fold, 360.0 / self.fold)

    def size(self, radians: float | None) -> float | None:
        """A spread in radians on the analysed circle as degrees shown."""
        return None if radians is None else math.degrees(radians) / self.fold

    def describe(self, angles: Angles, factor: float, mean: float | None, r: float) -> Description:
        n = len(angles)
        if n == 0:
            return Description(0, *([None] * 10))
        corrected = min(1.0, factor * r)
        test = uniformity.rayleigh(r, n)
        kappa = kappa_of(corrected) if n > 1 else None
        return Description(
            n,
            self.shown(mean),
            self.shown(median_direction(angles, mean)),
            corrected,
            1 - corrected,
            self.size(circular_sd(corrected)) if n > 1 and corrected > 0 else None,
            self.size(angular_deviation(corrected)) if n > 1 else None,
            kappa,
            kappa_corrected(kappa, n) if n > 1 else None,
            test.statistic,
            test.p,
        )

    def interval(self) -> Interval:
        least = 0.0
        if self.groups is None and self.width_deg is not None:
            least = math.sin(math.radians(self.width_deg) / math.sqrt(12))
        if self.groups is None:
            return interval(self.units, OF_READINGS, least_spread=least)
        return interval(self.units, OF_BEDFORMS, lengths=self.groups.weights())

    def summary(
        self, against_deg: float | None, target_deg: float | None, subject: str, *, spacing: bool
    ) -> Summary:
        units, groups, fold = self.units, self.groups, self.fold
        n = len(units)
        mean, r = mean_and_length(units) if n else (None, 0.0)
        said = self.describe(units, self.factor if groups is None else 1.0, mean, r)
        found = self.interval()
        doubled, trebled = uniformity.harmonic(units, 2), uniformity.harmonic(units, 3)
        pattern = Pattern(
            (said.rayleigh_p, doubled.p, trebled.p), (r, doubled.statistic or 0.0, trebled.statistic or 0.0)
        )
        modes = find_modes(units)
        outcome = decide(n, self.fewest, pattern, modes, axial=self.axial)
        half = found.half_width_deg if outcome == "one" and n >= self.fewest else None
        target = None if target_deg is None else target_deg * fold
        enough = None if target is None else half is not None and half <= target
        wanted = self._wanted(found, target, outcome, enough)
        bedforms = None if groups is None else groups.groups
        centre = found.mean_deg if groups is not None else mean
        directions = self._directions(outcome, modes, doubled, trebled)
        facts = Facts(
            outcome, len(self.angles), bedforms, self.fewest, self.axial, subject, self.shown(centre),
            None if half is None else half / fold, directions, target_deg, enough, wanted,
        )
        omnibus = self._omnibus(spacing)
        within = None if groups is None else by_bedform.within_sd(groups, self.factor)
        between = None if groups is None else by_bedform.between_sd(groups, within)
        per_bedform = 1.0 if not bedforms else len(self.angles) / bedforms
        v = uniformity.NOT_GIVEN if against_deg is None else uniformity.v_test(units, against_deg * fold)
        circumstances = Circumstances(
            len(self.angles), bedforms, self.fewest, self.axial, self.step_deg, self.beyond, self.unnamed,
            0 if groups is None else groups.without_mean, n > 1 and r == 1.0, centre is not None,
            half is not None, outcome, n, FEWEST_FOR_MODES, target_deg, wanted, omnibus.classes, omnibus.refused,
        )
        return Summary(
            n=len(self.angles),
            axial=self.axial,
            mean_direction_deg=self.shown(centre),
            median_direction_deg=said.median_direction_deg,
            resultant_length=said.resultant_length,
            circular_variance=said.circular_variance,
            circular_sd_deg=said.circular_sd_deg,
            angular_deviation_deg=said.angular_deviation_deg,
            kappa=said.kappa,
            kappa_corrected=said.kappa_corrected,
            ci95_low_deg=None if half is None or centre is None else self.shown(centre - half),
            ci95_high_deg=None if half is None or centre is None else self.shown(centre + half),
            ci_method=None if half is None else (OF_READINGS if groups is None else OF_BEDFORMS).method,
            rayleigh_z=said.rayleigh_z,
            rayleigh_p=said.rayleigh_p,
            v_u=v.statistic,
            v_p=v.p,
            kuiper_v=omnibus.kuiper.statistic,
            kuiper_p=omnibus.kuiper.p,
            watson_u2=omnibus.watson.statistic,
            watson_p=omnibus.watson.p,
            rao_u_deg=omnibus.rao.statistic,
            rao_p=omnibus.rao.p,
            modes=[Mode(self.shown(m.direction_deg) or 0.0, m.kappa, m.weight) for m in modes or []],
            readings_needed=None if wanted is None else math.ceil(wanted * per_bedform - 1e-9),
            bedforms=bedforms,
            between_bedform_sd_deg=self.size(between),
            within_bedform_sd_deg=self.size(within),
            bedforms_needed=None if groups is None else wanted,
            outcome=outcome,
            finding=finding(facts),
            notes=notes(circumstances),
            target_deg=target_deg,
            enough=enough,
            threshold_resultant=threshold(n) if n >= FEWEST_TO_SAY else None,
            ci95_half_width_deg=None if half is None else half / fold,
            doubled_p=doubled.p,
            trebled_p=trebled.p,
            bedform_means_deg=None if groups is None else [self.shown(x) or 0.0 for x in units.tolist()],
            by_readings=None if groups is None else self.describe(self.angles, self.factor, *mean_and_length(self.angles)),
            second_order=None if groups is None else self._second_order(),
        )

    def _wanted(self, found: Interval, target: float | None, outcome: str, enough: bool | None) -> int | None:
        n = len(self.units)
        if target is None or outcome != "one" or found.spread is None or n < self.fewest:
            return None
        rule = OF_READINGS if self.groups is None else OF_BEDFORMS
        count = needed(found.spread, n, target, rule)
        if count is None:
            return None
        count = max(count, self.fewest)
        return min(count, n) if enough else max(count, n + 1)

    def _directions(
        self, outcome: str, modes: Sequence[Mode] | None, doubled: uniformity.Test, trebled: uniformity.Test
    ) -> list[float]:
        """The directions that the finding names when there is no single mean, as shown."""
        order = {"two_opposed": 2, "two": 2, "three_or_more": 3}.get(outcome)
        if order is None:
            return []
        if modes is not None and len(modes) >= 2:
            found = [m.direction_deg for m in modes]
        else:
            multiplied, r = mean_and_length(order * self.units)
            found = [] if multiplied is None or r < NO_LENGTH else [
                (multiplied + 360.0 * i) / order for i in range(order)
            ]
        return [self.shown(d) or 0.0 for d in found]

    def _second_order(self) -> SecondOrder:
        assert self.groups is not None
        f = hotelling(self.groups.means_deg, self.groups.lengths)
        weighted = moore(self.groups.means_deg, self.groups.lengths)
        return SecondOrder(f.statistic, f.p, weighted.statistic, weighted.p)

    def _omnibus(self, spacing: bool) -> _Omnibus:
        return _Omnibus.of(self.units, None if self.groups is not None else self.width_deg, spacing)


@dataclass(frozen=True)
class _Omnibus:
    """Kuiper, Watson and Rao, with p for classes where the readings are in classes."""

    kuiper: uniformity.Test
    watson: uniformity.Test
    rao: uniformity.Test
    classes: bool
    refused: str

    @staticmethod
    def of(units: Angles, width_deg: float | None, spacing: bool) -> _Omnibus:
        kuiper, watson = uniformity.kuiper(units), uniformity.watson(units)
        counts = None
        refused = ""
        if width_deg is not None and len(units) >= uniformity.FEWEST_FOR_OMNIBUS:
            counts = classes.class_counts(units, width_deg)
            if 360.0 / width_deg < classes.FEWEST_CLASSES - 0.5:
                kuiper, watson = uniformity.Test(kuiper.statistic, None), uniformity.Test(watson.statistic, None)
                refused = "Kuiper, Watson and Rao p are not given: the reading step leaves too few classes."
        many = None if width_deg is None else round(360.0 / width_deg)
        rao = rao_spacing(units, classes=many) if spacing else uniformity.NOT_GIVEN
        if counts is not None:
            kuiper = uniformity.Test(kuiper.statistic, classes.kuiper_p(counts))
            watson = uniformity.Test(watson.statistic, classes.watson_p(counts))
        if many is not None and rao.statistic is not None and rao.p is None and not refused and len(units) >= 5:
            refused = "Rao p is not given: so many readings in so few classes are mostly ties."
        return _Omnibus(kuiper, watson, rao, counts is not None, refused)
