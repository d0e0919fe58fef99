"""What must hold for any sample, and what two general-purpose libraries say of the same readings.

The witnesses at test time are scipy.stats and astropy.stats, over samples drawn by hypothesis:
concentrated, diffuse, bimodal, and rounded to 1, 5 and 10 deg.
"""

from __future__ import annotations

import math
from typing import Any

import astropy.units as u
import numpy as np
import pytest
from astropy.stats import circstats
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from scipy import optimize, special, stats

from fieldlog.science.summary import Summary, summarise

SETTINGS = settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow], database=None)
SIZES = st.one_of(st.integers(1, 40), st.sampled_from([100, 500, 5000]))


@st.composite
def readings(draw: Any, sizes: Any = SIZES) -> np.ndarray:
    """Degrees, shape (n,)."""
    n = draw(sizes)
    random = np.random.default_rng(draw(st.integers(0, 2**32 - 1)))
    kappa = draw(st.sampled_from([0.0, 0.3, 1.0, 5.0, 50.0, 2000.0]))
    angles = random.uniform(0, 360) + np.degrees(random.vonmises(0, kappa, n))
    if draw(st.booleans()):
        angles = angles + np.where(random.random(n) < 0.5, 0, draw(st.sampled_from([60, 90, 180])))
    step = draw(st.sampled_from([None, 1, 5, 10]))
    angles = angles % 360
    return angles if step is None else np.round(angles / step) * step % 360


def same_direction(one: float | None, other: float | None, limit: float, tolerance: float = 1e-7) -> bool:
    if one is None or other is None:
        return one is other
    return abs((one - other + limit / 2) % limit - limit / 2) <= tolerance


def of_length(summary: Summary) -> list[Any]:
    """All that neither turning nor mirroring may change."""
    return [
        summary.resultant_length, summary.circular_sd_deg, summary.kappa, summary.kappa_corrected, summary.rayleigh_z,
        summary.rayleigh_p, summary.kuiper_v, summary.watson_u2, summary.rao_u_deg, summary.ci95_half_width_deg,
    ]


def close(one: list[Any], other: list[Any]) -> None:
    assert [value is None for value in one] == [value is None for value in other]
    np.testing.assert_allclose(
        [value for value in one if value is not None], [value for value in other if value is not None], rtol=1e-6, atol=1e-9
    )


def clear(summary: Summary) -> bool:
    """Whether the mean stands well enough for its last digits to be compared."""
    return bool(summary.resultant_length and summary.resultant_length > 1e-6)


@SETTINGS
@given(readings())
def test_scipy_and_astropy_say_the_same(angles: np.ndarray) -> None:
    said = summarise(angles, spacing=False)
    theta = np.deg2rad(angles)
    r = float(np.hypot(np.cos(theta).mean(), np.sin(theta).mean()))
    assert said.n == len(angles)
    assert said.resultant_length == pytest.approx(1 - stats.circvar(theta), abs=1e-9)
    assert said.resultant_length == pytest.approx(float(circstats.circmoment(theta * u.rad)[1]), abs=1e-9)
    if r > 1e-6:
        assert same_direction(said.mean_direction_deg, math.degrees(stats.circmean(theta)), 360)
        assert same_direction(said.mean_direction_deg, float(circstats.circmean(theta * u.rad).to_value(u.deg)), 360)
    if said.n > 1 and 1e-6 < r < 1 - 1e-9:
        assert said.circular_sd_deg == pytest.approx(math.degrees(stats.circstd(theta)), rel=1e-6)
        assert said.circular_sd_deg == pytest.approx(float(np.degrees(circstats.circstd(theta, method="circular"))), rel=1e-6)
        assert said.angular_deviation_deg == pytest.approx(float(np.degrees(circstats.circstd(theta, method="angular"))), rel=1e-6)


@SETTINGS
@given(readings(st.integers(3, 40)))
def test_kappa_solves_the_likelihood_equation_as_scipy_does(angles: np.ndarray) -> None:
    """Root of I1/I0 = R by scipy's own Bessel functions and brentq; neither library's approximation is used."""
    said = summarise(angles, spacing=False)
    r = said.resultant_length or 0.0
    if not 1e-3 < r < 0.999:
        return
    root = optimize.brentq(lambda k: special.i1e(k) / special.i0e(k) - r, 1e-9, 1e5, xtol=1e-13, rtol=1e-14)
    assert said.kappa == pytest.approx(root, rel=1e-7)


@SETTINGS
@given(readings(st.integers(10, 500)))
def test_the_rayleigh_p_is_astropys_within_what_its_approximation_leaves_out(angles: np.ndarray) -> None:
    """astropy.stats.rayleightest: the series of its docstring below 50 readings, exp(-z) from there on.

    What exp(-z) leaves out is z (2 - z) exp(-z) / (4 n), at most 0.116 / n.
    """
    n = len(angles)
    said = summarise(angles, spacing=False)
    left_out = 1e-3 if n < 50 else 0.12 / n
    assert said.rayleigh_p == pytest.approx(float(circstats.rayleightest(np.deg2rad(angles) * u.rad)), abs=left_out)


@SETTINGS
@given(readings(st.integers(1, 60)), st.floats(-720, 720))
def test_turning_turns_the_mean_only(angles: np.ndarray, turn: float) -> None:
    before, after = summarise(angles), summarise(angles + turn)
    close(of_length(before), of_length(after))
    assert before.outcome == after.outcome
    if clear(before):
        assert same_direction(before.mean_direction_deg, (after.mean_direction_deg or 0.0) - turn, 360, 1e-5)


@SETTINGS
@given(readings(st.integers(1, 60)))
def test_a_mirror_image_has_the_mirrored_mean(angles: np.ndarray) -> None:
    before, after = summarise(angles), summarise(-angles)
    close(of_length(before), of_length(after))
    if clear(before):
        assert same_direction(before.mean_direction_deg, -(after.mean_direction_deg or 0.0), 360, 1e-6)


@SETTINGS
@given(readings(st.integers(1, 60)), st.randoms(use_true_random=False))
def test_order_and_whole_turns_do_not_matter(angles: np.ndarray, random: Any) -> None:
    mixed = (angles + 360 * np.array([random.randint(-3, 3) for _ in angles])).tolist()
    random.shuffle(mixed)
    before, after = summarise(angles), summarise(mixed)
    close(of_length(before), of_length(after))
    assert same_direction(before.median_direction_deg, after.median_direction_deg, 360, 1e-6)
    assert before.finding == after.finding


@SETTINGS
@given(readings(st.integers(1, 60)), st.integers(0, 2**32 - 1))
def test_an_axis_has_no_ends(angles: np.ndarray, seed: int) -> None:
    ends = np.random.default_rng(seed).integers(0, 2, len(angles)) * 180
    before, after = summarise(angles, axial=True), summarise(angles + ends, axial=True)
    close(of_length(before), of_length(after))
    assert same_direction(before.mean_direction_deg, after.mean_direction_deg, 180, 1e-6)
    assert before.finding == after.finding


@SETTINGS
@given(readings(st.integers(1, 40)))
def test_axes_are_doubled_and_halved_back(angles: np.ndarray) -> None:
    """Mean, SD, deviation and interval as axes are half those of the doubled angles; R, kappa and tests are theirs."""
    axes, doubled = summarise(angles, axial=True), summarise(2 * angles)
    for name in ("resultant_length", "kappa", "rayleigh_p", "kuiper_v", "watson_u2"):
        one, other = getattr(axes, name), getattr(doubled, name)
        assert one is other is None or one == pytest.approx(other, rel=1e-9)
    for name in ("circular_sd_deg", "angular_deviation_deg", "mean_direction_deg"):
        half = getattr(doubled, name)
        assert same_direction(getattr(axes, name), None if half is None else half / 2, 180, 1e-7)
