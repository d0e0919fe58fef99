"""What the readings of one site say: its samples, each with its summary."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Final

from fieldlog.science.summary import Summary, summarise
from fieldlog.sheet.sample import Sample, samples
from fieldlog.sheet.vocabulary import label_of


@dataclass(frozen=True)
class Measure:
    """A bearing that results are given for."""

    column: str
    title: str
    subject: str
    axial: bool


MEASURES: Final = (
    Measure("slip_face_deg", "Slip faces", "Slip faces", axial=False),
    Measure("crest_deg", "Crests", "Crests", axial=True),
)


@dataclass(frozen=True)
class Result:
    """One sample of one measure and what it says."""

    measure: Measure
    sample: Sample
    summary: Summary
    target_deg: float

    @property
    def sample_name(self) -> str:
        """Order, face and dune type in words; what was not said is left out."""
        parts = [
            label_of(vocabulary, value) + (" faces" if vocabulary == "face" else "")
            for vocabulary, value in (
                ("face", self.sample.face), ("bedform_order", self.sample.order), ("dune_type", self.sample.dune_type),
            )
            if value
        ]
        return ", ".join(parts) or "order, face and type not said"


def target_of(survey: Mapping[str, Any], site: Mapping[str, Any]) -> float:
    """The site's target half-width, or the survey's."""
    return float(site["target_half_width_deg"] or survey["target_half_width_deg"])


def more_needed(result: Result) -> int | None:
    """Dunes (without dunes: readings) still missing for the target; None where it cannot be said."""
    summary = result.summary
    wanted = summary.readings_needed if summary.bedforms is None else summary.bedforms_needed
    taken = summary.n if summary.bedforms is None else summary.bedforms
    return None if wanted is None else max(0, wanted - taken)


def step_of(rows: Sequence[Mapping[str, Any]], records: set[str]) -> float | None:
    """The coarsest step to which the readings were taken; None where none was said."""
    steps = [row["reading_step_deg"] for row in rows if row["record"] in records and row["reading_step_deg"]]
    return max(steps, default=None)


def results(survey: Mapping[str, Any], site: Mapping[str, Any], rows: Sequence[Mapping[str, Any]], measure: Measure, same: Sequence[tuple[str, str]] = ()) -> list[Result]:
    """The site's samples of a measure, the default one first; empty where nothing was read.

    `same`: pairs of dunes that a lead has called one.
    """
    found = []
    target = target_of(survey, site)
    for sample in samples(rows, measure.column, same):
        summary = summarise(
            sample.angles,
            bedforms=sample.bedforms if any(name is not None for name in sample.bedforms) else None,
            axial=measure.axial,
            step_deg=step_of(rows, set(sample.records)),
            against_deg=None if measure.axial else site["expected_facing_deg"],
            target_deg=target,
            fewest_bedforms=survey["fewest_dunes"] or 5,
            subject=measure.subject,
            spacing=False,
        )
        found.append(Result(measure, sample, summary, target))
    return found
