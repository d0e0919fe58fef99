"""What is invented by hand: the place, the crew, the dunes, and who was where when.

The coordinates lie in open ocean, so that nobody takes the sand sea for a real one; the magnetic
declination there (about -16 degrees) is large enough to matter.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, datetime, timedelta, timezone

APP = "0.1.0"
"""The program that the made entries name; it stays as it is when the program moves on."""
SURVEY_ID = "desertdem0"
BASE = "dem0base0000001"
LOCAL = timezone(timedelta(hours=4))
"""Etc/GMT-4 names the zone four hours ahead of UTC."""
SURVEY = {
    "name": "Orvassa sand sea, corridor 4",
    "time_zone": "Etc/GMT-4",
    "target_half_width_deg": 10,
    "fewest_dunes": 5,
    "reading_step_deg": 2,
    "optional_fields": ["height_m", "activity"],
    "note": "Invented demonstration survey. Which way do the dunes face along corridor 4, and what is the ground "
    "made of, before the track is fixed there?",
}


@dataclass(frozen=True)
class Person:
    """A crew member with a phone and a compass. `clock_ms`: how far the phone's clock is off base's."""

    key: str
    name: str
    device: str
    instrument: str
    step_deg: int
    north: str
    clock_ms: int


CREW = (
    Person("maren", "Maren Åskvold", "dem0ph0ne000001", "K-1", 1, "magnetic", 140),
    Person("tome", "Tomé Quiñarel", "dem0ph0ne000002", "K-2", 2, "magnetic", -820),
    Person("ysolde", "Ysolde Márrak", "dem0ph0ne000003", "K-3, set", 1, "set", 2310),
    Person("brad", "Bråd Hellünder", "dem0ph0ne000004", "old brass", 5, "magnetic", 0),
    Person("samir", "سمير الوادين", "dem0ph0ne000005", "K-5", 2, "magnetic", -3950),
)
LEAD = "maren"


@dataclass(frozen=True, eq=False)
class Site:
    """A site and the dunes that stand on it. Facings are true, towards; `between` and `within` are SDs.

    `places` stand along the transect; `seed` turns up another set of dunes of the same character.
    """

    key: str
    values: dict[str, object]
    transect_deg: float
    places: int = 12
    seed: int = 0
    facing_deg: tuple[float, ...] = ()
    between_deg: float = 9.0
    within_deg: float = 4.0
    dune_type: str = "barchanoid"
    grains: tuple[str, ...] = ("fine_sand", "fine_sand", "medium_sand")


def _site(name: str, lat: float, lon: float, radius: int, pattern: str, note: str, **more: object) -> dict[str, object]:
    return {"name": name, "lat_deg": lat, "lon_deg": lon, "radius_m": radius, "dune_pattern": pattern,
            "dune_rule": "transect", "note": note, **more}


SITES = (
    Site("tamrel", _site("Tamrel Combs", -19.9462, 66.0318, 700, "barchanoid ridges",
                         "Soft sand from the south; park on the gravel.", expected_facing_deg=310.0),
         transect_deg=305, facing_deg=(312,), between_deg=10),
    Site("ushkar", _site("Ushkar Fork", -19.9725, 66.0904, 650, "two sets of transverse ridges",
                         "Two sets cross here: read whichever set the transect meets."),
         transect_deg=20, places=24, facing_deg=(248, 353), between_deg=8, dune_type="transverse"),
    Site("belq", _site("Belq Stars", -20.0131, 66.0557, 900, "star dunes",
                       "Tall: keep off the lee slopes after noon.", dune_rule="all"),
         transect_deg=75, places=10, seed=5, facing_deg=(0, 120, 240), within_deg=7, dune_type="star"),
    Site("sorrel", _site("Sorrel Gap", -19.9318, 66.1236, 300, "scattered barchans",
                         "Few dunes between two outcrops.", dune_rule="all"),
         transect_deg=110, places=3, facing_deg=(325,), between_deg=12, dune_type="barchan"),
    Site("dovani", _site("Dovani Flats", -20.0418, 66.1189, 600, "barchans on gravel",
                         "Much was written down in a hurry here."),
         transect_deg=300, places=10, facing_deg=(300,), between_deg=6, within_deg=3, dune_type="barchan",
         grains=("medium_sand", "medium_sand", "coarse_sand")),
    Site("hesk", _site("Hesk Pavement", -20.0694, 66.0231, 800, "stone pavement without dunes",
                       "No dunes. A wash crosses it: leave when rain is about.", dune_rule="random_point"),
         transect_deg=160, places=16),
    Site("turnback", _site("Turnback Ridges", -19.9987, 66.1602, 650, "reversing ridges",
                           "Caps turned round by last week's wind.", expected_facing_deg=210.0),
         transect_deg=215, places=9, facing_deg=(207,), between_deg=9, dune_type="reversing"),
    Site("lomar", _site("Lomar Lines", -20.0247, 65.9863, 850, "linear ridges",
                        "Faces stand east or west of the crest, ridge by ridge.", target_half_width_deg=8.0),
         transect_deg=84, facing_deg=(82, 262), between_deg=7, dune_type="linear"),
)


@dataclass(frozen=True)
class Round:
    """One person reading some dunes of a site, several readings on each."""

    start: datetime
    person: str
    site: str
    dunes: range
    readings: int


def at(day: int, clock: str) -> datetime:
    """A time of the three days, written as the crew's watches show it."""
    hour, minute = clock.split(":")
    return datetime(2026, 7, 6 + day, int(hour), int(minute), tzinfo=LOCAL).astimezone(UTC)


ROUNDS = (
    Round(at(1, "06:20"), "maren", "tamrel", range(1, 7), 5),
    Round(at(1, "06:25"), "tome", "tamrel", range(7, 13), 5),
    Round(at(1, "06:30"), "ysolde", "ushkar", range(1, 13), 3),
    Round(at(1, "06:40"), "brad", "sorrel", range(1, 4), 4),
    Round(at(1, "06:15"), "samir", "belq", range(1, 6), 6),
    Round(at(1, "15:10"), "maren", "hesk", range(1, 9), 1),
    Round(at(1, "15:00"), "tome", "lomar", range(1, 5), 4),
    Round(at(1, "14:50"), "brad", "dovani", range(1, 5), 5),
    Round(at(1, "15:00"), "samir", "belq", range(6, 11), 6),
    Round(at(2, "06:30"), "maren", "turnback", range(1, 6), 5),
    Round(at(2, "06:20"), "tome", "lomar", range(5, 13), 4),
    Round(at(2, "06:40"), "ysolde", "ushkar", range(13, 25), 3),
    Round(at(2, "06:30"), "brad", "dovani", range(5, 8), 5),
    Round(at(2, "06:35"), "samir", "dovani", range(8, 11), 5),
    Round(at(2, "15:20"), "maren", "hesk", range(9, 17), 1),
    Round(at(3, "06:40"), "ysolde", "turnback", range(6, 10), 5),
)
"""Every start of one person is later than that person's one before."""

CHECKS = (
    (at(3, "07:00"), "maren", (("tamrel", 7, 1), ("tamrel", 8, 2), ("tamrel", 9, 0))),
    (at(3, "07:10"), "tome", (("ushkar", 1, 0), ("ushkar", 3, 2), ("ushkar", 5, 1))),
    (at(3, "07:20"), "samir", (("tamrel", 3, 3), ("tamrel", 5, 0))),
)
"""Readings taken a second time by another person without seeing the first: (site, dune, reading)."""

WITHOUT_FIX = (("lomar", 6, 2), ("lomar", 9, 1))
"""Readings whose phone found no fix; Tomé's walk of 8 July places them."""

NOTES = {
    ("tamrel", 1, 0): "Reference ridge, cairn on the north horn.",
    ("tamrel", 4, 2): "Avalanche running while I sighted. The brink stands a good two metres behind the crest here and the "
    "sand between them is rippled square to the face; the ridge to the east is lower, has no brink at all and was left "
    "out because the line does not cross it. Wind about three on the hand gauge, from the south-east, since dawn.",
    ("tamrel", 10, 4): "Dégradée, croûte mince sur le bas.",
    ("ushkar", 2, 1): "This one belongs to the western set.",
    ("ushkar", 8, 0): "Both sets meet within thirty metres; this is the northern set's face, sharp and fresh.",
    ("belq", 1, 0): "ثلاثة أذرع، الذراع الشمالي أعلاها.",
    ("belq", 7, 3): "رمل ناعم على الحافة وخشن عند القاعدة؛ الانهيار حديث والحافة حادة. عدت إلى المكان بعد الظهر "
    "فوجدت الوجه نفسه قد تحرك نحو شبر. الصخرة السوداء علامة جيدة للعودة.",
    ("sorrel", 3, 3): "No more dunes in the gap.",
    ("turnback", 2, 3): "Cap about 60 cm high, turned by the north-east wind of the week before.",
    ("lomar", 3, 0): "Face on the east side for as far as I can see.",
    ("hesk", 3, 0): "Varnished stones, closely set; the fines beneath are pale and puff when stepped on.",
    ("hesk", 11, 0): "Bed of the wash. Driftwood at knee height.",
}

PICTURES = {
    ("tamrel", 4, 2): ("tamrel-ridge-4.jpg", 309.0),
    ("belq", 3, 1): ("belq-star-3.jpg", 20.0),
    ("turnback", 2, 3): ("turnback-cap-2.jpg", 40.0),
    ("lomar", 3, 0): ("lomar-line-3.jpg", 352.0),
    ("hesk", 3, 0): ("hesk-stones-3.jpg", 170.0),
}
"""(site, dune, reading) -> file name and the bearing looked along."""

SEEDED = {
    ("dovani", 2, 2): "dip",
    ("dovani", 3, 1): "not_square",
    ("dovani", 4, 3): "opposed",
    ("dovani", 6, 2): "repeated",
    ("dovani", 7, 0): "far_from_site",
    **{("dovani", dune, reading): "wrong_north" for dune in (8, 9, 10) for reading in range(5)},
}
"""Slips put in on purpose: the code of the question that a check should ask."""

EDITS = (
    (at(1, "19:05"), "tome", ("tamrel", 8, 1), {"grain_class": "medium_sand"}),
    (at(1, "19:10"), "maren", ("tamrel", 2, 3), {"note": "Sighted along the eastern half only."}),
    (at(1, "19:12"), "maren", ("tamrel", 6, 4), {"slip_face_dip_deg": 32}),
    (at(1, "19:20"), "brad", ("sorrel", 2, 1), {"sorting": "moderate"}),
    (at(1, "19:25"), "samir", ("belq", 2, 4), {"note": "القراءة مأخوذة من أعلى الذراع."}),
    (at(1, "19:30"), "brad", ("sorrel", 1, 2), {"crossed_out": "Steel water can stood beside the compass"}),
    (at(1, "19:35"), "samir", ("belq", 4, 5), {"crossed_out": "Read on the neighbour's arm"}),
    (at(1, "19:40"), "ysolde", ("ushkar", 3, 2), {"crossed_out": "Thought I had read the wrong face"}),
    (at(2, "19:05"), "ysolde", ("ushkar", 3, 2), {"crossed_out": None}),
    (at(2, "19:10"), "tome", ("tamrel", 5, 1), {"grain_class": "coarse_sand"}),
    (at(2, "19:15"), "ysolde", ("tamrel", 5, 1), {"grain_class": "very_fine_sand"}),
    (at(2, "19:20"), "brad", ("dovani", 6, 4), {"crossed_out": "The truck stood too near"}),
    (at(2, "19:25"), "samir", ("belq", 9, 2), {"crossed_out": "Face slipped while I sighted"}),
    (at(2, "19:30"), "tome", ("lomar", 7, 0), {"slip_face_state": "degraded"}),
    (at(3, "19:05"), "ysolde", ("turnback", 8, 1), {"sorting": "well"}),
    (at(3, "19:10"), "maren", ("hesk", 12, 0), {"stone_cover_percent": 70}),
)
"""What was changed in camp, in order of time. On 8 July Tomé and Ysolde change the same grain size
before either has handed over: two versions."""

DESK = (
    (at(3, "20:30"), "dovani", {"note": "Much was written down in a hurry here. Ask Samir about the north he read from."}),
)
"""What the lead changed at base."""
