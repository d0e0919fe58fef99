"""`ergbook stats`: what a column of bearings shows."""

from __future__ import annotations

import json
from typing import Any

import click

from fieldlog.cli.columns import TableError, column_index, labels, numbers, read_table


@click.command()
@click.argument("file", metavar="FILE")
@click.option("--column", help="The column of angles, where the file has several.")
@click.option("--axial", is_flag=True, help="The angles are axes: 30 and 210 are the same.")
@click.option("--step", type=click.FloatRange(0, 90, min_open=True), metavar="DEG", help="What bearings were read to.")
@click.option("--against", type=float, metavar="DEG", help="Test against this direction (V test).")
@click.option("--target", type=click.FloatRange(0, 90, min_open=True), metavar="DEG", help="The half-width wanted.")
@click.option("--bedform", metavar="COLUMN", help="The column that names the dune of each reading.")
@click.option("--fewest", type=click.IntRange(2), default=5, show_default=True, help="Fewest dunes for a finding.")
@click.option("--subject", default="readings", show_default=True, help="The words that begin the finding.")
@click.option("--json", "as_json", is_flag=True, help="Print JSON.")
def stats(
    file: str,
    column: str | None,
    axial: bool,
    step: float | None,
    against: float | None,
    target: float | None,
    bedform: str | None,
    fewest: int,
    subject: str,
    as_json: bool,
) -> None:
    """Describe the angles in FILE (degrees; CSV with a header or a plain list; - reads standard input)."""
    from fieldlog.cli.stats_table import table_lines
    from fieldlog.science.summary import summarise

    table = read_table(file)
    values, rows, empty = numbers(table, column_index(table, column, option="--column", path=file))
    if not values:
        raise TableError("there are no readings", file, "Give at least one angle in degrees.")
    names = None
    if bedform is not None:
        names = labels(table, column_index(table, bedform, option="--bedform", path=file), rows)
    summary = summarise(
        values,
        bedforms=names,
        axial=axial,
        step_deg=step,
        against_deg=against,
        target_deg=target,
        fewest_bedforms=fewest,
        subject=subject,
    )
    said: dict[str, Any] = summary.as_json()
    if empty:
        said["notes"] = [*said["notes"], f"{empty} row{'' if empty == 1 else 's'} without a value left out."]
    if as_json:
        click.echo(json.dumps(said, ensure_ascii=False, allow_nan=False))
        return
    for line in table_lines(values, said):
        click.echo(line)
