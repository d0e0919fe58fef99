"""Make the demonstration survey: `python demo_survey/make.py`. Everything in it is invented.

With --check nothing is written; exit 1 where the files that stand are not what would be made.
"""

from __future__ import annotations

import hashlib
import json
import sys
from collections.abc import Callable
from datetime import datetime, timedelta
from functools import partial
from pathlib import Path
from typing import Any

from country import (
    BASE,
    CHECKS,
    CREW,
    DESK,
    EDITS,
    LEAD,
    PICTURES,
    ROUNDS,
    SEEDED,
    SITES,
    SURVEY,
    SURVEY_ID,
    Person,
    at,
)
from fieldwork import Key, Values, day_of, dune, observe, pause, random_for, stroll
from notebooks import Notebooks
from pictures import HEIGHT, WIDTH, jpeg
from walks import Point, Stop, track_gpx, walk, waypoints_gpx

from fieldlog.sheet.times import wire_time

FOLDER = Path(__file__).resolve().parent
READ = ("slip_face_read_deg", "slip_face_looking", "crest_read_deg", "slip_face_dip_deg")


class Demo:
    """The survey as it is made: records by the names that `country` uses.

    What people do is planned first and said in order of time, because every device numbers what it
    says as it goes.
    """

    def __init__(self) -> None:
        self.books = Notebooks()
        self.people = {person.key: person for person in CREW}
        self.places = {site.key: site for site in SITES}
        self.plan: list[tuple[datetime, Callable[[], None]]] = []
        self.crew: dict[str, str] = {}
        self.sites: dict[str, str] = {}
        self.observations: dict[Key, str] = {}
        self.checks: list[str] = []
        self.photos: dict[str, bytes] = {}
        self.stops: dict[tuple[str, int], list[list[Stop]]] = {}

    def set_up(self) -> None:
        """What the lead enters at base the day before."""
        when = at(0, "17:00")
        for person in sorted(CREW, key=lambda one: one.key != LEAD):
            when += timedelta(seconds=31)
            values = {"name": person.name, "lead": person.key == LEAD}
            self.crew[person.key] = self.books.say(BASE, self.crew.get(LEAD), "crew", values, when)
        self.books.say(BASE, self.crew[LEAD], "survey", SURVEY, when + timedelta(seconds=40))
        for site in SITES:
            when += timedelta(seconds=95)
            self.sites[site.key] = self.books.say(BASE, self.crew[LEAD], "site", site.values, when)

    def carry_out(self) -> None:
        for _, act in sorted(self.plan, key=lambda step: step[0]):
            act()

    def plan_rounds(self) -> None:
        for round_ in ROUNDS:
            site, person = self.places[round_.site], self.people[round_.person]
            random = random_for("round", round_.site, round_.start)
            when, stops = round_.start, []
            for number in round_.dunes:
                before, said = Values(), when
                for reading in range(round_.readings):
                    key = (site.key, number, reading)
                    values = observe(person, site, key, when, random)
                    if SEEDED.get(key) == "repeated":
                        when = said + timedelta(seconds=25)
                        values |= {name: before[name] for name in READ} | {"observed_at": wire_time(when)}
                    before, said = values, when
                    self.plan.append((when, partial(self._observe, person, key, values, when)))
                    place = dune(site, number)
                    stops.append((values.get("lat_deg", place.lat), values.get("lon_deg", place.lon),
                                  place.altitude_m, when))
                    when += pause(random)
                when += stroll(random)
            self.stops.setdefault((person.key, day_of(round_.start)), []).append(stops)

    def _observe(self, person: Person, key: Key, values: Values, when: datetime) -> None:
        self.observations[key] = self._save(person, key, values, when)
        if key in PICTURES:
            name, bearing = PICTURES[key]
            self._photograph(person, self.observations[key], name, bearing, when + timedelta(seconds=25))

    def _save(self, person: Person, key: Key, values: Values, when: datetime) -> str:
        said = {"site": self.sites[key[0]], **values}
        return self.books.say(person.device, self.crew[person.key], "observation", said, when + timedelta(seconds=9))

    def _photograph(self, person: Person, observation: str, name: str, bearing: float, when: datetime) -> None:
        data = self.photos[name] = jpeg(name, FOLDER / "photos" / name)
        values = {
            "observation": observation, "sha256": hashlib.sha256(data).hexdigest(), "bytes": len(data),
            "width_px": WIDTH, "height_px": HEIGHT, "bearing_deg": bearing, "taken_at": wire_time(when),
        }
        self.books.say(person.device, self.crew[person.key], "photo", values, when)

    def plan_checks(self) -> None:
        """Another person reads the same face, the first reading unseen."""
        for start, who, keys in CHECKS:
            random, when = random_for("check", who, start), start
            for key in keys:
                values = observe(self.people[who], self.places[key[0]], key, when, random)
                values.pop("note", None)
                self.plan.append((when, partial(self._check, self.people[who], key, values, when)))
                when += stroll(random)

    def _check(self, person: Person, key: Key, values: Values, when: datetime) -> None:
        self.checks.append(self._save(person, key, values | {"check_of": self.observations[key]}, when))

    def plan_walks(self) -> dict[str, str]:
        """The two GPX tracks; Samir's is in the ledger too, Tomé's waits to be imported."""
        made = {}
        for who, day, name in (("samir", 7, "Belq, 7 July"), ("tome", 8, "Lomar, 8 July")):
            random = random_for("walk", who)
            segments = [walk(stops, random) for stops in self.stops[who, day]]
            made[f"tracks/{who}-{day}-july.gpx"] = track_gpx(name, segments)
            if who == "samir":
                self._plan_track(self.people[who], name, segments)
        return made

    def _plan_track(self, person: Person, name: str, segments: list[list[Point]]) -> None:
        for part, points in enumerate(segments, start=1):
            values = {"name": name, "crew": self.crew[person.key], "part": part, "points": points}
            when = at(1, "18:40") + timedelta(seconds=part)
            by = self.crew[person.key]
            self.plan.append((when, partial(self._say, person.device, by, "track", values, when)))

    def _say(
        self, device: str, by: str, kind: str, values: Values, when: datetime, record: str | None = None
    ) -> None:
        self.books.say(device, by, kind, values, when, record)

    def plan_corrections(self) -> None:
        for when, who, key, values in EDITS:
            self.plan.append((when, partial(self._edit, self.people[who], key, values, when)))
        for when, site, said in DESK:
            record = self.sites[site]
            self.plan.append((when, partial(self._say, BASE, self.crew[LEAD], "site", said, when, record)))

    def _edit(self, person: Person, key: Key, values: Values, when: datetime) -> None:
        self.books.say(person.device, self.crew[person.key], "observation", values, when, self.observations[key])


def files() -> dict[str, bytes]:
    """Every made file: path within the folder -> bytes."""
    demo = Demo()
    demo.set_up()
    demo.plan_rounds()
    demo.plan_checks()
    demo.plan_corrections()
    texts = demo.plan_walks()
    demo.carry_out()
    lines = [
        json.dumps({"device": entry.device, "n": entry.n, "text": entry.text}, ensure_ascii=False)
        for entry in demo.books.handed_over()
    ]
    texts["ledger.jsonl"] = "\n".join(lines) + "\n"
    texts["sites.gpx"] = waypoints_gpx([site.values for site in SITES])
    texts["manifest.json"] = _json({
        "survey": SURVEY_ID, "base_device": BASE, "entries": len(lines),
        "ledger_sha256": hashlib.sha256("\n".join(lines).encode()).hexdigest(),
        "photos": {name: hashlib.sha256(data).hexdigest() for name, data in sorted(demo.photos.items())},
    })
    texts["cast.json"] = _json({
        "sites": demo.sites, "crew": demo.crew, "check_readings": demo.checks,
        "seeded": {demo.observations[key]: slip for key, slip in SEEDED.items()},
    })
    made = {path: text.encode() for path, text in texts.items()}
    return made | {f"photos/{name}": data for name, data in demo.photos.items()}


def _json(value: Any) -> str:
    return json.dumps(value, ensure_ascii=False, indent=1) + "\n"


def stale(made: dict[str, bytes]) -> list[str]:
    """Files that are missing or differ; line endings do not count."""
    return [
        path for path, data in made.items()
        if not (FOLDER / path).exists() or _lines((FOLDER / path).read_bytes(), path) != _lines(data, path)
    ]


def _lines(data: bytes, path: str) -> bytes:
    return data if path.endswith(".jpg") else data.replace(b"\r\n", b"\n")


def main(arguments: list[str]) -> int:
    made = files()
    different = stale(made)
    if "--check" in arguments:
        for path in different:
            print(f"demo_survey/{path} is not what demo_survey/make.py makes: run it", file=sys.stderr)
        return 1 if different else 0
    for path in different:
        (FOLDER / path).parent.mkdir(exist_ok=True)
        (FOLDER / path).write_bytes(made[path])
    print(f"{len(made)} files, {sum(map(len, made.values())) // 1024} kB; {len(different)} of them written")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
