"""`ergbook compare`: do samples of bearings differ?"""

from __future__ import annotations

import json
from typing import Any

import click

from fieldlog.cli.columns import TableError, column_index, labels, numbers, read_table


@click.command()
@click.argument("file", metavar="FILE")
@click.option("--by", required=True, metavar="COLUMN", help="The column that names the sample of each reading.")
@click.option("--column", required=True, help="The column of angles in degrees.")
@click.option("--axial", is_flag=True, help="The angles are axes: 30 and 210 are the same.")
@click.option("--bedform", metavar="COLUMN", help="The column that names the dune of each reading.")
@click.option("--json", "as_json", is_flag=True, help="Print JSON.")
def compare(file: str, by: str, column: str, axial: bool, bedform: str | None, as_json: bool) -> None:
    """Compare the samples in FILE (CSV with a header; - reads standard input)."""
    from fieldlog.science.comparison import compare_samples

    table = read_table(file)
    if not table.header:
        raise TableError("the file has no header", file, f"Give CSV with the columns {by} and {column}.")
    values, rows, empty = numbers(table, column_index(table, column, option="--column", path=file))
    if not values:
        raise TableError("there are no readings", file, "Give at least one angle in degrees for each sample.")
    names = labels(table, column_index(table, by, option="--by", path=file), rows)
    dunes = None if bedform is None else labels(table, column_index(table, bedform, option="--bedform", path=file), rows)
    samples: dict[str, list[float]] = {}
    bedforms: dict[str, list[str | None]] = {}
    unnamed = 0
    for i, (value, name) in enumerate(zip(values, names, strict=True)):
        if name is None:
            unnamed += 1
            continue
        samples.setdefault(name, []).append(value)
        bedforms.setdefault(name, []).append(None if dunes is None else dunes[i])
    compared = compare_samples(samples, bedforms=None if dunes is None else bedforms, axial=axial)
    said: dict[str, Any] = compared.as_json()
    for count, what in ((empty, "without a value"), (unnamed, f"without {by}")):
        if count:
            said["notes"].append(f"{count} row{'' if count == 1 else 's'} {what} left out.")
    if as_json:
        click.echo(json.dumps(said, ensure_ascii=False, allow_nan=False))
        return
    for line in _lines(said):
        click.echo(line)


def _lines(said: dict[str, Any]) -> list[str]:
    """The sentence, the samples, the tests, the pairs and the notes."""
    from fieldlog.science.comparison import p_text

    lines = [said["sentence"], ""]
    wide = max(len(s["name"]) for s in said["samples"])
    for s in said["samples"]:
        mean = "none" if s["mean_direction_deg"] is None else f"{s['mean_direction_deg']:.1f} deg"
        dunes = "" if s["bedforms"] is None else f"  dunes {s['bedforms']}"
        lines.append(f"{s['name']:<{wide}}  n {s['n']:>5}{dunes}  mean {mean:>9}  length {s['resultant_length']:.4f}")
    lines.append("")
    for t in said["tests"]:
        figure = "-" if t["statistic"] is None else f"{t['statistic']:.4f}"
        p = "-" if t["p"] is None else p_text(t["p"])
        method = f" ({t['p_method']})" if t["p_method"] else ""
        note = f"  {t['note']}" if t["note"] else ""
        lines.append(f"{t['name']:<22} {figure:>10}  {p}{method}{note}")
    lines += [
        f"{pair['first']} / {pair['second']}: {p_text(pair['p'])}, corrected for all pairs {p_text(pair['p_holm'])}"
        for pair in said["pairs"]
    ]
    return [*lines, *([""] if said["notes"] else []), *said["notes"]]
