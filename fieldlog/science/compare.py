"""Tests that compare samples of directions: sites, days, observers, instruments.

All take a list of arrays in degrees on the circle that is analysed, each of independent directions,
and are unchanged by rotation.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray
from scipy import special

from fieldlog.science.angles import Angles, reduced
from fieldlog.science.classes import chi_square_p
from fieldlog.science.concentration import kappa_of
from fieldlog.science.moments import mean_and_length
from fieldlog.science.permutation import LARGEST, Labels, permutation_p
from fieldlog.science.uniformity import watson_tail

FEWEST_EACH: Final = 3
EQUAL_FROM_P: Final = 0.05


@dataclass(frozen=True)
class Comparison:
    """One test. `p` by `p_method`; `assumption_ok` None where nothing is assumed."""

    name: str
    statistic: float | None
    df: tuple[int, ...] | None
    p: float | None
    p_method: str | None
    assumption_ok: bool | None
    note: str
    p_chi2: float | None = None
    k_factor: float | None = None


def watson_williams(samples: Sequence[Angles]) -> Comparison:
    """Watson-Williams test that the mean directions are the same.

    F = K (N - k) (sum R_j - R) / ((k - 1)(N - sum R_j)) with resultants (not means), K = 1 + 3/(8 kappa)
    and kappa from sum R_j / N, k - 1 and N - k degrees: Zar 2010, eq. 27.10 (from memory). Assumes
    von Mises samples of one concentration, kappa at least 1 (2 for two samples). (R's package takes
    kappa from the pooled sample, which inflates F where the means differ.)
    """
    k, total = len(samples), sum(map(len, samples))
    resultants = [len(s) * mean_and_length(s)[1] for s in samples]
    pooled = total * mean_and_length(np.concatenate(samples))[1]
    within = total - sum(resultants)
    kappa = kappa_of(min(sum(resultants) / total, 1.0))
    if kappa is None or within <= 1e-9 * total or kappa <= 0:
        return Comparison("watson_williams", None, None, None, None, False, "The samples do not vary.")
    factor = 1 + 3 / (8 * kappa)
    f = factor * (total - k) * (sum(resultants) - pooled) / ((k - 1) * within)
    f = max(f, 0.0)
    p = float(special.fdtrc(k - 1, total - k, f))
    least = 2.0 if k == 2 else 1.0
    equal = equal_concentration(samples)
    ok = kappa >= least and (equal.p is None or equal.p > EQUAL_FROM_P)
    note = "" if ok else (
        f"Kappa {kappa:.2f} is below {least:g}: too spread for this test." if kappa < least
        else "The samples are not equally concentrated, which this test assumes."
    )
    return Comparison("watson_williams", f, (k - 1, total - k), p, "F", ok, note, k_factor=factor)


def equal_concentration(samples: Sequence[Angles]) -> Comparison:
    """Test that the samples are equally concentrated, chi-square with k - 1 degrees.

    Mardia & Jupp 2000, section 7.4.2 (from memory; R's equal.kappa.test uses the same three ranges):
    below R 0.45 and 0.70 by transformed lengths, above by Bartlett's form on n_j - R_j. Needs five
    directions a sample.
    """
    name, df = "equal_concentration", (len(samples) - 1,)
    n = np.array([len(s) for s in samples], dtype=np.float64)
    if n.min() < 5:
        return Comparison(name, None, None, None, None, None, "Needs at least 5 directions in each sample.")
    r = np.array([mean_and_length(s)[1] for s in samples])
    overall = float((n * r).sum() / n.sum())
    if overall < 0.70:
        if overall < 0.45:
            weight, g = 4 * (n - 4) / 3, np.arcsin(np.minimum(math.sqrt(3 / 8) * 2 * r, 1.0))
        else:
            weight, g = (n - 3) / 0.798, np.arcsinh((r - 1.0894) / 0.25789)
        u = float((weight * g * g).sum() - (weight * g).sum() ** 2 / weight.sum())
    else:
        left, nu = n * (1 - r), n - 1
        if left.min() <= 1e-12:
            return Comparison(name, None, None, None, None, None, "A sample does not vary.")
        d = float((1 / nu).sum() - 1 / nu.sum()) / (3 * (len(samples) - 1))
        u = float(nu.sum() * math.log(left.sum() / nu.sum()) - (nu * np.log(left / nu)).sum()) / (1 + d)
    u = max(u, 0.0)
    return Comparison(name, u, df, chi_square_p(u, df[0]), "chi-square", None, "")


def mardia_watson_wheeler(samples: Sequence[Angles]) -> Comparison:
    """Mardia-Watson-Wheeler test that the samples have one distribution, by uniform scores.

    W = 2 sum (C_j^2 + S_j^2) / n_j on 2 pi rank / N, midranks for ties; 2 (k - 1) degrees. Mardia &
    Jupp 2000, section 8.3.2 (from memory). (Zar and R multiply by (N - 1)/N for two samples.) p by
    permutation up to 2,000 directions.
    """
    pooled = np.concatenate(samples)
    total = len(pooled)
    scores = np.exp(2j * math.pi * _midranks(reduced(pooled)) / total)
    sizes = np.array([len(s) for s in samples])
    labels = np.repeat(np.arange(len(samples)), sizes)

    def statistic(rows: Labels) -> Angles:
        w = np.zeros(len(rows))
        for j, size in enumerate(sizes.tolist()):
            w += 2 * np.abs((scores * (rows == j)).sum(axis=1)) ** 2 / size
        return w

    w = float(statistic(labels[None, :])[0])
    df = 2 * (len(samples) - 1)
    chi = chi_square_p(w, df)
    small = total <= LARGEST
    p = permutation_p(statistic, labels) if small else chi
    method = "permutation" if small else "chi-square"
    return Comparison("mardia_watson_wheeler", w, (df,), p, method, None, "", p_chi2=chi)


def watson_u2_two_sample(samples: Sequence[Angles]) -> Comparison:
    """Watson's two-sample U2 that both samples have one distribution, in the form that counts ties.

    n1 n2 / N^2 [sum t d^2 - (sum t d)^2 / N], d the difference of the distribution functions at each
    different value, t how often it occurs: Zar 2010, eq. 27.18 (from memory). p by permutation up to
    2,000 directions, beyond that Watson's asymptotic tail.
    """
    first, second = samples
    pooled = reduced(np.concatenate([first, second]))
    order = np.argsort(pooled, kind="stable")
    values = pooled[order]
    ends = np.flatnonzero(np.append(np.diff(values) > 1e-9, True))
    ties = np.diff(np.concatenate([[-1], ends])).astype(np.float64)
    n1, n2 = len(first), len(second)
    total = n1 + n2
    labels = np.repeat([0, 1], [n1, n2])[order]

    def statistic(rows: Labels) -> Angles:
        ones = np.cumsum(rows, axis=1)[:, ends].astype(np.float64)
        d = (ends + 1 - ones) / n1 - ones / n2
        return np.asarray(n1 * n2 / total**2 * ((ties * d * d).sum(axis=1) - (ties * d).sum(axis=1) ** 2 / total))

    u2 = float(statistic(labels[None, :])[0])
    small = total <= LARGEST
    p = permutation_p(statistic, labels) if small else watson_tail(u2)
    return Comparison("watson_u2_two_sample", u2, None, p, "permutation" if small else "asymptotic", None, "")


def holm(p_values: Sequence[float]) -> list[float]:
    """Holm's step-down correction of p values, in the order given: Holm 1979, Scand. J. Stat. 6, 65-70.

    >>> [round(p, 3) for p in holm([0.01, 0.04, 0.03])]
    [0.03, 0.06, 0.06]
    """
    m = len(p_values)
    held, most = [0.0] * m, 0.0
    for rank, i in enumerate(sorted(range(m), key=lambda i: p_values[i])):
        most = max(most, min(1.0, (m - rank) * p_values[i]))
        held[i] = most
    return held


def _midranks(values: Angles) -> NDArray[np.float64]:
    """Ranks from 1; equal values share the middle of theirs."""
    _, where, counts = np.unique(np.round(values, 9), return_inverse=True, return_counts=True)
    ends = np.cumsum(counts)
    return np.asarray((ends - (counts - 1) / 2)[where], dtype=np.float64)
