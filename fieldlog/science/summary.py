"""Everything that is said about one sample, in one frozen record. Mirrored in static/js/science/summary.js."""

from __future__ import annotations

import math
from collections.abc import Hashable, Iterable, Sequence
from dataclasses import asdict, dataclass
from typing import Any

from fieldlog.science import bedforms as by_bedform
from fieldlog.science import uniformity
from fieldlog.science.angles import SampleError, checked
from fieldlog.science.finding import Facts, Pattern, decide, finding
from fieldlog.science.interval import Interval
from fieldlog.science.modes import FEWEST as FEWEST_FOR_MODES
from fieldlog.science.modes import Mode, find_modes
from fieldlog.science.moments import mean_and_length
from fieldlog.science.needed import needed
from fieldlog.science.notes import Circumstances, notes
from fieldlog.science.omnibus import omnibus
from fieldlog.science.sample import FEWEST_TO_SAY, Description, Sample
from fieldlog.science.second_order import hotelling, moore
from fieldlog.science.walk import threshold


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
    sample = _sample(angles_deg, bedforms, axial, step_deg, against_deg, target_deg, fewest_bedforms)
    units, groups, fold, n = sample.units, sample.groups, sample.fold, len(sample.units)
    described = sample.describe(units, sample.factor if groups is None else 1.0)
    doubled, trebled = uniformity.harmonic(units, 2), uniformity.harmonic(units, 3)
    mean, r = mean_and_length(units) if n else (None, 0.0)
    pattern = Pattern(
        (described.rayleigh_p, doubled.p, trebled.p), (r, doubled.statistic or 0.0, trebled.statistic or 0.0)
    )
    modes = find_modes(units)
    outcome = decide(n, sample.fewest, pattern, modes, axial=axial)

    found = sample.interval()
    centre = mean if groups is None else found.mean_deg
    half = found.half_width_deg if outcome == "one" else None
    target = None if target_deg is None else target_deg * fold
    enough = None if target is None else half is not None and half <= target
    wanted = _wanted(sample, found, target, enough) if outcome == "one" else None
    count = None if groups is None else groups.groups

    width = sample.width_deg if groups is None else None
    tests = omnibus(units, width, spacing=spacing)
    v = uniformity.NOT_GIVEN if against_deg is None else uniformity.v_test(units, against_deg * fold)
    within = None if groups is None else by_bedform.within_sd(groups, sample.factor)
    between = None if groups is None else by_bedform.between_sd(groups, within)
    return Summary(
        n=len(sample.angles),
        axial=axial,
        mean_direction_deg=sample.shown(centre),
        median_direction_deg=described.median_direction_deg,
        resultant_length=described.resultant_length,
        circular_variance=described.circular_variance,
        circular_sd_deg=described.circular_sd_deg,
        angular_deviation_deg=described.angular_deviation_deg,
        kappa=described.kappa,
        kappa_corrected=described.kappa_corrected,
        ci95_low_deg=None if half is None or centre is None else sample.shown(centre - half),
        ci95_high_deg=None if half is None or centre is None else sample.shown(centre + half),
        ci_method=None if half is None else sample.rule.method,
        rayleigh_z=described.rayleigh_z,
        rayleigh_p=described.rayleigh_p,
        v_u=v.statistic,
        v_p=v.p,
        kuiper_v=tests.kuiper.statistic,
        kuiper_p=tests.kuiper.p,
        watson_u2=tests.watson.statistic,
        watson_p=tests.watson.p,
        rao_u_deg=tests.rao.statistic,
        rao_p=tests.rao.p,
        modes=[Mode(sample.shown(m.direction_deg) or 0.0, m.kappa, m.weight) for m in modes or []],
        readings_needed=_readings(sample, wanted),
        bedforms=count,
        between_bedform_sd_deg=sample.size(between),
        within_bedform_sd_deg=sample.size(within),
        bedforms_needed=None if groups is None else wanted,
        outcome=outcome,
        finding=finding(
            Facts(
                outcome=outcome,
                readings=len(sample.angles),
                bedforms=count,
                fewest=sample.fewest,
                axial=axial,
                subject=subject,
                mean_deg=sample.shown(centre),
                half_width_deg=None if half is None else half / fold,
                directions_deg=_directions(sample, outcome, modes),
                target_deg=target_deg,
                enough=enough,
                needed=wanted,
            )
        ),
        notes=notes(
            Circumstances(
                readings=len(sample.angles),
                bedforms=count,
                fewest_bedforms=sample.fewest,
                axial=axial,
                step_deg=step_deg,
                reduced=sample.beyond,
                unnamed=sample.unnamed,
                without_mean=0 if groups is None else groups.without_mean,
                identical=n > 1 and r == 1.0,
                mean_exists=centre is not None,
                has_interval=half is not None,
                outcome=outcome,
                units=n,
                fewest_for_modes=FEWEST_FOR_MODES,
                needed=wanted,
                classes=tests.classes,
                classes_refused=tests.refused,
            )
        ),
        target_deg=target_deg,
        enough=enough,
        threshold_resultant=threshold(n) if n >= FEWEST_TO_SAY else None,
        ci95_half_width_deg=None if half is None else half / fold,
        doubled_p=doubled.p,
        trebled_p=trebled.p,
        bedform_means_deg=None if groups is None else [sample.shown(x) or 0.0 for x in units.tolist()],
        by_readings=None if groups is None else sample.describe(sample.angles, sample.factor),
        second_order=None if groups is None else _second_order(groups),
    )


def _sample(
    angles_deg: Iterable[float],
    bedforms: Sequence[Hashable] | None,
    axial: bool,
    step_deg: float | None,
    against_deg: float | None,
    target_deg: float | None,
    fewest_bedforms: int,
) -> Sample:
    """The checked sample; raises SampleError."""
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
    return Sample(raw, bedforms, axial, step_deg, fewest_bedforms)


def _wanted(sample: Sample, found: Interval, target: float | None, enough: bool | None) -> int | None:
    """Independent directions needed in all for the target."""
    n = len(sample.units)
    if target is None or found.spread is None:
        return None
    count = needed(found.spread, n, target, sample.rule)
    if count is None:
        return None
    count = max(count, sample.fewest)
    return min(count, n) if enough else max(count, n + 1)


def _readings(sample: Sample, wanted: int | None) -> int | None:
    """Readings on the wanted number of bedforms, as many on each as now."""
    if wanted is None or sample.groups is None:
        return wanted
    return math.ceil(wanted * len(sample.angles) / sample.groups.groups - 1e-9)


def _directions(sample: Sample, outcome: str, modes: Sequence[Mode] | None) -> list[float]:
    """The directions that the finding names when there is no single mean, as shown."""
    order = {"two_opposed": 2, "two": 2, "three_or_more": 3}.get(outcome)
    if order is None:
        return []
    if modes is not None and len(modes) >= 2:
        found = [m.direction_deg for m in modes]
    else:
        multiplied, _ = mean_and_length(order * sample.units)
        found = [] if multiplied is None else [(multiplied + 360.0 * i) / order for i in range(order)]
    return [sample.shown(d) or 0.0 for d in found]


def _second_order(groups: by_bedform.Bedforms) -> SecondOrder:
    f = hotelling(groups.means_deg, groups.lengths)
    weighted = moore(groups.means_deg, groups.lengths)
    return SecondOrder(f.statistic, f.p, weighted.statistic, weighted.p)
