"""What the readings say, as rows: one per site, measure and sample."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator
from typing import Any, Final

from fieldlog.exports.columns import Column, columns_of, pick, text
from fieldlog.exports.rows import Row, SurveyRows
from fieldlog.review.results import MEASURES, Result, more_needed, results

_OBSERVED: Final = columns_of("observation")


def _number(name: str, label: str, explained: str = "", *, unit: str = "", kind: str = "real") -> Column:
    return Column(name=name, type=kind, label=label, help=explained, unit=unit)


COLUMNS: Final = (
    text("record", "Site record", "The site's id in the survey's ledger."),
    text("uuid", "Site UUID", "The same id as a UUID of version 8."),
    text("site_name", "Site", "Name of the site."),
    text("measure", "Measure", "The column of observations that was summarised: slip_face_deg or crest_deg."),
    _number("axial", "Axial", "True for an axis (0 <= x < 180), false for a direction (0 <= x < 360).", kind="flag"),
    text("sample", "Sample", "Face, order and dune type of the readings; samples never mix them."),
    *pick(_OBSERVED, "bedform_order", "face", "dune_type"),
    _number("main_sample", "Main sample", "True for the site's largest sample of the measure.", kind="flag"),
    _number("n_readings", "Readings", "Crossed-out observations and check readings are left out.", kind="integer"),
    _number("n_dunes", "Dunes", "Dunes that the readings are on; empty where no dune was numbered.", kind="integer"),
    _number("mean_deg", "Mean direction, true",
            "Towards which slip faces face, or along which crests run; only where there is one direction.", unit="deg"),
    _number("resultant_length", "Mean resultant length", "0 to 1; of doubled angles for axes, of dunes' means with dunes."),
    _number("ci95_low_deg", "95 % interval, low", "Runs clockwise from low to high. Sampling error only.", unit="deg"),
    _number("ci95_high_deg", "95 % interval, high", "Sampling error only: compass and model come on top.", unit="deg"),
    _number("ci95_half_width_deg", "95 % interval, half-width", unit="deg"),
    text("ci_method", "Method of the interval"),
    _number("circular_sd_deg", "Circular SD", "sqrt(-2 ln R).", unit="deg"),
    _number("rayleigh_p", "Rayleigh p", "Chance of so long a resultant if there were no direction."),
    text("outcome", "Outcome", "one, two_opposed, two, three_or_more, spread or too_few."),
    text("directions_deg", "Directions", "Up to three modes, degrees, the strongest first."),
    text("finding", "Finding", "The plain sentence that says what the readings show."),
    _number("target_deg", "Target half-width", unit="deg"),
    _number("enough", "Enough", "Whether the interval is within the target.", kind="flag"),
    _number("dunes_needed", "Dunes needed", "In all, those taken included; empty where it cannot be said.", kind="integer"),
    _number("readings_needed", "Readings needed", "In all, as many on each dune as now.", kind="integer"),
    _number("more_needed", "Still needed", "Dunes, or readings where no dune is numbered, still to take.", kind="integer"),
    text("notes", "Notes", "What was corrected, and what could not be given and why."),
)

_USED: Final = (
    "record", "site", "bedform", "bedform_order", "face", "dune_type", "reading_step_deg", "crossed_out", "check_of",
    *(measure.column for measure in MEASURES),
)


def site_statistics(rows: SurveyRows) -> Iterator[tuple[Row, Row]]:
    """(site, statistics) for every sample of every standing site."""
    readings: dict[str, list[Row]] = defaultdict(list)
    for row in rows.stream("observation"):
        readings[row["site"]].append({name: row[name] for name in _USED})
    same: dict[str, list[tuple[str, str]]] = defaultdict(list)
    for row in rows.stream("same_dune"):
        if not row["crossed_out"]:
            same[row["site"]].append((row["dune"], row["other"]))
    for site in rows.stream("site"):
        if site["crossed_out"]:
            continue
        for measure in MEASURES:
            for index, result in enumerate(results(rows.survey, site, readings[site["record"]], measure, same[site["record"]])):
                yield site, _row(site, result, main=index == 0)


def _row(site: Row, result: Result, *, main: bool) -> Row:
    summary = result.summary
    row: dict[str, Any] = {
        "record": site["record"],
        "uuid": site["uuid"],
        "site_name": site["name"],
        "measure": result.measure.column,
        "axial": result.measure.axial,
        "sample": result.sample_name,
        "bedform_order": result.sample.order,
        "face": result.sample.face,
        "dune_type": result.sample.dune_type,
        "main_sample": main,
        "n_readings": summary.n,
        "n_dunes": summary.bedforms,
        "mean_deg": summary.mean_direction_deg if summary.outcome == "one" else None,
        "directions_deg": " ".join(f"{mode.direction_deg:.1f}" for mode in summary.modes) or None,
        "target_deg": result.target_deg,
        "dunes_needed": summary.bedforms_needed,
        "more_needed": more_needed(result),
        "notes": " ".join(summary.notes) or None,
    }
    for column in COLUMNS:
        if column.name not in row:
            row[column.name] = getattr(summary, column.name)
    return row
