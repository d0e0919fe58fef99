"""The least that matters: a survey with a lead and one site, and entries of a phone."""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Any

from fieldlog.ledger.entry import write_text
from fieldlog.store.append import Prepared, append, open_survey, prepare, say
from fieldlog.store.transaction import write

WHEN = datetime(2026, 3, 4, 5, 6, 7, tzinfo=UTC)


class Survey:
    """A survey with a lead and one site."""

    def __init__(self) -> None:
        with write() as session:
            self.id = open_survey(session)
            self.lead = say(session, self.id, by=None, kind="crew", values={"name": "Lead", "lead": True})
            say(session, self.id, by=self.lead, kind="survey",
                values={"name": "Test", "time_zone": "UTC", "target_half_width_deg": 10})
            self.site = say(session, self.id, by=self.lead, kind="site",
                            values={"name": "One", "lat_deg": 20.0, "lon_deg": 10.0})

    def text(self, n: int, values: dict[str, Any] | None = None, **more: Any) -> str:
        base = {"site": self.site, "observed_at": "2026-03-04T05:06:07Z", "north": "true", "crest_read_deg": n % 360}
        return write_text(app="0.1.0", by=self.lead, survey=self.id, kind="observation",
                          values=base if values is None else values, hlc=f"{n:012x}.0000", made_at=WHEN, **more)

    def batch(self, numbers: range) -> list[Prepared]:
        return [prepare(self.id, n, self.text(n)) for n in numbers]


def send(survey: Survey, device: str, batch: list[Prepared]) -> list[str]:
    with write() as session:
        results, _ = append(session, survey.id, device, batch)
    return [result.status for result in results]
