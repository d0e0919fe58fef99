"""Speed of the statistics against the bare arithmetic and against a general-purpose library."""

from __future__ import annotations

import math

import astropy.units as u
import numpy as np
from astropy.stats import circmean, circstd, circvar, rayleightest, vonmisesmle

from fieldlog.science.many import describe_many
from tests.bench.clock import ratio
from tests.bench.trials import Numbers, generator

SITES, READINGS = 1000, 200


def measure() -> Numbers:
    """One sample of a million angles, and a thousand sites."""
    million = generator("million").uniform(0, 360, 1_000_000)
    size = np.array([len(million)])

    def bare() -> float:
        theta = np.deg2rad(million)
        return math.hypot(float(np.sin(theta).sum()), float(np.cos(theta).sum()))

    sites = np.degrees(generator("sites").vonmises(1.0, 3.0, (SITES, READINGS))) % 360
    sizes = np.full(SITES, READINGS)

    def looped() -> None:
        for site in sites:
            angles = np.deg2rad(site) * u.rad
            circmean(angles)
            circvar(angles)
            circstd(angles)
            vonmisesmle(angles)
            rayleightest(angles)

    return {
        **ratio("circular.million_over_numpy", lambda: describe_many(million, size), bare, rounds=9),
        **ratio("circular.library_over_sites", looped, lambda: describe_many(sites.ravel(), sizes), rounds=3, bottoms=5),
    }
