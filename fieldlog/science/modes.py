"""Up to three modes: a mixture of von Mises distributions, chosen by an information criterion."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import combinations
from typing import Final

import numpy as np
from numpy.typing import NDArray
from scipy import special

from fieldlog.science.angles import Angles, reduced
from fieldlog.science.concentration import kappa_of, kappas_of
from fieldlog.science.moments import direction_deg, mean_and_length

FEWEST: Final = 20
FEWEST_IN_A_MODE: Final = 5
MOST_PLACES: Final = 1440
LARGEST_KAPPA: Final = 500.0
SMALLEST_KAPPA: Final = 1.0
"""A component flatter than this is a background, not a mode."""
SETTLED: Final = (1e-9, 1e-12)
"""Largest movement at which EM stops: while it sorts the starts, and at its end."""
LEAST_APART_DEG: Final = 30.0
"""Components nearer than this are the shape of one mode, not two."""

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Mode:
    """One von Mises component: where it points, its concentration, its share of the readings."""

    direction_deg: float
    kappa: float
    weight: float


@dataclass(frozen=True)
class Mixture:
    """Modes by falling weight, and the log-likelihood in radians."""

    modes: list[Mode]
    log_likelihood: float

    def bic(self, n: int) -> float:
        """k ln n - 2 ln L with k = 3m - 1 parameters for m modes, none for the uniform."""
        k = 3 * len(self.modes) - 1 if self.modes else 0
        return k * math.log(n) - 2 * self.log_likelihood


def find_modes(angles_deg: Angles) -> list[Mode] | None:
    """The modes of a sample, by falling weight: none (uniform), one, two or three.

    `angles_deg`: shape (n,). Returns None below 20 readings: modes are not sought there. A fit with
    fewer than 5 readings in a mode, a mode flatter than kappa 1 or two modes within 30 deg is not
    taken. Chosen by BIC (Schwarz 1978).
    """
    n = len(angles_deg)
    if n < FEWEST:
        return None
    best, lowest = uniform(n), uniform(n).bic(n)
    for count in (1, 2, 3):
        # The log-likelihood that this many modes must have to be chosen.
        least = ((3 * count - 1) * math.log(n) - lowest) / 2
        found = fit(angles_deg, count, least=least)
        if (count == 1 or _distinct(found.modes, n)) and found.bic(n) < lowest:
            best, lowest = found, found.bic(n)
    return best.modes


def uniform(n: int) -> Mixture:
    """No mode at all."""
    return Mixture([], -n * math.log(2 * math.pi))


def fit(angles_deg: Angles, count: int, *, least: float = -math.inf) -> Mixture:
    """Maximum-likelihood mixture of `count` von Mises distributions (1 to 3), by EM with exact kappa.

    Deterministic and turning with the sample: the circle is cut at its widest gap and the starts are
    the pairs or triples of six quantiles; each runs 10 steps, the best two go on to 500 at most. A
    fit that after 10 steps is more than 3 below the log-likelihood `least`, or after 50 more than 1,
    is left there. Kappa is capped at 500, where a component sits on tied readings. Above 1,440
    different values the readings are put in classes of 0.25 deg. Source: Banerjee et al. 2005, J. Mach. Learn. Res. 6, 1345-1382.
    """
    if count == 1:
        return _single(angles_deg)
    x, weight = _places(angles_deg)
    cut = _after_widest_gap(x)
    order = np.concatenate([np.arange(cut, len(x)), np.arange(cut)])
    share = (np.cumsum(weight[order]) - 0.5 * weight[order]) / weight.sum()
    places = [np.searchsorted(share, (2 * i + 1) / 12).clip(0, len(x) - 1) for i in range(6)]
    quantiles = np.deg2rad(x[order][places])
    starts = np.array(list(combinations(quantiles, count)))
    state = np.array([starts, np.full_like(starts, 4.0), np.full_like(starts, 1 / count)])
    theta = np.deg2rad(x)
    state, log_likelihood = _run(theta, weight, state, 10, SETTLED[0])
    ranked = sorted(range(len(starts)), key=lambda i: (-math.floor(log_likelihood[i] * 1e6 + 0.5), i))[:2]
    runs = [(state[:, i : i + 1], log_likelihood[i : i + 1]) for i in ranked]
    for steps, hope, settled in ((40, 3.0, SETTLED[0]), (450, 1.0, SETTLED[1])):
        if max(float(reached[0]) for _, reached in runs) + hope < least:
            break
        runs = [_run(theta, weight, held, steps, settled) for held, _ in runs]
    best, reached = max(runs, key=lambda end: float(end[1][0]))
    modes = [Mode(direction_deg(math.cos(mu), math.sin(mu)), kappa, w) for mu, kappa, w in best[:, 0].T.tolist()]
    return Mixture(sorted(modes, key=lambda m: -m.weight), float(reached[0]))


def _single(angles_deg: Angles) -> Mixture:
    n = len(angles_deg)
    mean, r = mean_and_length(angles_deg)
    kappa = kappa_of(r)
    kappa = LARGEST_KAPPA if kappa is None else min(kappa, LARGEST_KAPPA)
    log_likelihood = n * (kappa * (r - 1) - math.log(2 * math.pi * special.i0e(kappa)))
    return Mixture([Mode(0.0 if mean is None else mean, kappa, 1.0)], log_likelihood)


def _places(angles_deg: Angles) -> tuple[Array, Array]:
    """Different values, ascending, and how often each occurs."""
    x, counts = np.unique(reduced(angles_deg), return_counts=True)
    if len(x) > MOST_PLACES:
        classes = np.floor(x * (MOST_PLACES / 360.0)).astype(int)
        held = np.bincount(classes, weights=counts, minlength=MOST_PLACES).astype(np.float64)
        filled = np.flatnonzero(held)
        return np.asarray((filled + 0.5) * (360.0 / MOST_PLACES), dtype=np.float64), np.asarray(held[filled])
    return x, counts.astype(np.float64)


def _after_widest_gap(x: Array) -> int:
    gaps = np.diff(np.concatenate([x[-1:] - 360.0, x]))
    return int(np.argmax(gaps >= gaps.max() - 1e-9))


def _run(theta: Array, weight: Array, state: Array, steps: int, settled: float) -> tuple[Array, Array]:
    """EM from several states at once until none moves `settled`; their log-likelihoods.

    `state`: shape (3, starts, modes), rows mean, kappa, weight.
    """
    cosines, sines = weight * np.cos(theta), weight * np.sin(theta)
    for _ in range(steps):
        density = _densities(theta, state)
        share = density / density.sum(axis=2, keepdims=True)
        c, s = np.tensordot(cosines, share, 1), np.tensordot(sines, share, 1)
        held = np.tensordot(weight, share, 1)
        lengths = np.minimum(np.hypot(c, s) / np.maximum(held, 1e-300), 1.0)
        following = np.array([np.arctan2(s, c), kappas_of(lengths, LARGEST_KAPPA), held / weight.sum()])
        change = np.abs(following - state)
        change[1] /= np.maximum(1.0, following[1])
        moved = change.max()
        state = following
        if moved < settled:
            break
    return state, np.tensordot(weight, np.log(_densities(theta, state).sum(axis=2)), 1)


def _densities(theta: Array, state: Array) -> Array:
    """Shape (readings, starts, modes)."""
    mu, kappa, w = state
    deviation = np.cos(theta[:, None, None] - mu) - 1
    return np.asarray(w / (2 * math.pi * special.i0e(kappa)) * np.exp(kappa * deviation))


def _distinct(modes: list[Mode], n: int) -> bool:
    for i, mode in enumerate(modes):
        if mode.weight * n < FEWEST_IN_A_MODE or mode.kappa < SMALLEST_KAPPA:
            return False
        for other in modes[:i]:
            if math.cos(math.radians(mode.direction_deg - other.direction_deg)) > math.cos(
                math.radians(LEAST_APART_DEG)
            ):
                return False
    return True
