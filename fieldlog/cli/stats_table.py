"""A summary as a readable table with a rose of text."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any, Final

from fieldlog.science.angles import reduced_one

ROWS: Final = (
    ("readings", "n", ""),
    ("dunes", "bedforms", ""),
    ("mean direction", "mean_direction_deg", "deg"),
    ("median direction", "median_direction_deg", "deg"),
    ("95 % interval from", "ci95_low_deg", "deg"),
    ("95 % interval to", "ci95_high_deg", "deg"),
    ("interval method", "ci_method", ""),
    ("mean resultant length", "resultant_length", ""),
    ("circular variance", "circular_variance", ""),
    ("circular SD", "circular_sd_deg", "deg"),
    ("angular deviation", "angular_deviation_deg", "deg"),
    ("kappa, maximum likelihood", "kappa", ""),
    ("kappa, small-sample corrected", "kappa_corrected", ""),
    ("SD between dunes", "between_bedform_sd_deg", "deg"),
    ("SD within dunes", "within_bedform_sd_deg", "deg"),
    ("readings needed in all", "readings_needed", ""),
    ("dunes needed in all", "bedforms_needed", ""),
)
TESTS: Final = (
    ("Rayleigh z", "rayleigh_z", "rayleigh_p"),
    ("V test u", "v_u", "v_p"),
    ("Kuiper V", "kuiper_v", "kuiper_p"),
    ("Watson U2", "watson_u2", "watson_p"),
    ("Rao U (deg)", "rao_u_deg", "rao_p"),
)
EIGHTHS: Final = " ▏▎▍▌▋▊▉█"
BAR: Final = 30


def table_lines(angles_deg: Sequence[float], said: dict[str, Any]) -> list[str]:
    """The finding, the numbers, the rose and the notes; values that do not exist are left out."""
    lines = [said["finding"], ""]
    for label, key, unit in ROWS:
        if said[key] is not None:
            lines.append(f"{label:<30} {_figure(said[key], unit == 'deg')} {unit}".rstrip())
    for label, key, p in TESTS:
        if said[key] is not None:
            lines.append(f"{label:<30} {_figure(said[key], False):<10} {p_value(said[p])}".rstrip())
    for mode in said["modes"]:
        share, at = f"{100 * mode['weight']:.0f} %", _figure(mode["direction_deg"], True)
        lines.append(f"{'mode':<30} {at} deg, kappa {mode['kappa']:.2f}, {share}")
    lines += ["", *rose_lines(angles_deg, axial=said["axial"])]
    if said["notes"]:
        lines += ["", *said["notes"]]
    return lines


def p_value(p: float | None) -> str:
    """A p value as it is printed."""
    if p is None:
        return ""
    return "p < 0.001" if p < 0.001 else f"p = {p:.3f}"


def rose_lines(angles_deg: Sequence[float], *, axial: bool) -> list[str]:
    """Readings by 20 deg from north clockwise, a bar for each count."""
    period = 180 if axial else 360
    petals = [0] * (period // 20)
    for angle in angles_deg:
        petals[math.floor(reduced_one(angle + 10, period) / 20) % len(petals)] += 1
    most = max(petals)
    points = {0: "N", 90: "E", 180: "S", 270: "W"}
    lines = []
    for i, count in enumerate(petals):
        middle = 20 * i
        point = next((name for at, name in points.items() if middle - 10 <= at < middle + 10), "")
        whole, part = divmod(round(8 * BAR * count / most) if most else 0, 8)
        bar = EIGHTHS[8] * whole + EIGHTHS[part].strip()
        lines.append(f"{point:>2} {middle:>3} deg {bar} {count or ''}".rstrip())
    return lines


def _figure(value: Any, angle: bool) -> str:
    if isinstance(value, (str, int)):
        return str(value)
    return f"{value:.1f}" if angle else f"{value:.4f}"
