"""The other sheets: the survey itself, its crew and sites, photos and tracks."""

from __future__ import annotations

from typing import Final

from fieldlog.sheet.fields import Field, Sheet
from fieldlog.sheet.observation import OBSERVATION

_THRESHOLDS: Final = (
    ("square_deg", "number", "deg", 90, "Off square", "A slip face farther than this from square to its brink or crest."),
    ("steepest_deg", "number", "deg", 90, "Steepest dip", "A slip face that dips more."),
    ("gentlest_deg", "number", "deg", 90, "Gentlest dip", "A slip face that dips less."),
    ("accuracies", "number", "", 100, "Accuracies", "A place beyond its site's radius and so many times its own accuracy."),
    ("opposed_deg", "number", "deg", 90, "Turned round", "A slip face within this of opposite to the others."),
    ("opposed_others", "integer", "", 1000, "Others for turned round", "At least so many others."),
    ("opposed_resultant", "number", "", 1, "Their resultant length", "The others' resultant length, at least."),
    ("outlier_readings", "integer", "", 1000, "Readings for an outlier", "From so many readings on."),
    ("outlier_spreads", "number", "", 100, "Spreads for an outlier", "Farther than so many standard deviations from the nearest crowd."),
    ("repeat_s", "number", "s", 86400, "Saved twice", "The same value on the same dune within this time."),
    ("back_s", "number", "s", 86400, "Out of order", "Observed earlier than the one saved before it by more."),
    ("declination_deg", "number", "deg", 180, "Declination that tells", "True and magnetic are told apart from this declination up."),
    ("declination_steps", "number", "", 100, "Declination in steps", "And from so many reading steps up."),
    ("north_readings", "integer", "", 1000, "Readings of an instrument", "So many readings of an instrument's day, at least."),
    ("north_errors", "number", "", 100, "Errors of an instrument", "Off by so many standard errors."),
)
"""The thresholds of fieldlog.sheet.question that a survey may set; one that is not set keeps its default."""

ASKS: Final = "ask_"

SURVEY: Final = Sheet(
    kind="survey",
    label="Survey",
    fields=(
        Field(name="name", type="text", max_length=120, label="Name", group="survey", required=True,
              help="What the crew calls it."),
        Field(name="time_zone", type="text", max_length=60, label="Time zone", group="survey", required=True,
              help="IANA name such as Etc/GMT-3; a day runs from midnight to midnight there."),
        Field(name="target_half_width_deg", type="number", unit="deg", minimum=0.5, maximum=90, decimals=1,
              label="Target half-width", group="survey", required=True,
              help="How precise a mean direction must be: half of the 95 % interval."),
        Field(name="fewest_dunes", type="integer", minimum=2, maximum=100, label="Fewest dunes", group="survey",
              help="Below this number of dunes no site interval is given."),
        Field(name="reading_step_deg", type="number", unit="deg", minimum=0.1, maximum=45, decimals=1,
              label="Reading step", group="survey", help="The step to which the crew reads bearings."),
        Field(name="optional_fields", type="names", label="Optional fields", group="survey",
              help="Fields of the observation that this survey switches on."),
        Field(name="note", type="text", max_length=2000, label="Note", group="survey",
              help="What the survey is for, hazards, agreements."),
        Field(name="photo_long_edge_px", type="integer", unit="px", minimum=400, maximum=8000, label="Photos' long edge", group="survey",
              help="Photos are made no larger than this on the phone; 1600 where nothing is said."),
        Field(name="photo_original", type="flag", label="Keep the original photos", group="survey",
              help="Phones keep and hand over the camera's own file: ten times the bytes."),
        *(
            Field(name=f"{ASKS}{name}", type=kind, unit=unit, minimum=0, maximum=maximum, decimals=2 if kind == "number" else None,
                  label=label, group="questions", help=explained)
            for name, kind, unit, maximum, label, explained in _THRESHOLDS
        ),
    ),
    groups={"survey": "Survey", "questions": "When a check asks"},
)

CREW: Final = Sheet(
    kind="crew",
    label="Crew member",
    fields=(
        Field(name="name", type="text", max_length=80, label="Name", group="crew", required=True,
              help="As it should stand beside their readings."),
        Field(name="lead", type="flag", label="Lead", group="crew", help="Leads the survey."),
    ),
)

SITE: Final = Sheet(
    kind="site",
    label="Site",
    fields=(
        Field(name="name", type="text", max_length=80, label="Name", group="site", required=True,
              help="Short, as the crew says it."),
        Field(name="lat_deg", type="number", unit="deg", minimum=-90, maximum=90, decimals=7, label="Latitude",
              group="site", required=True, help="WGS 84, north positive."),
        Field(name="lon_deg", type="number", unit="deg", minimum=-180, maximum=180, decimals=7, label="Longitude",
              group="site", required=True, help="WGS 84, east positive."),
        Field(name="radius_m", type="number", unit="m", minimum=1, maximum=100000, decimals=0, label="Radius",
              group="site", help="The site is this far around its point."),
        Field(name="dune_pattern", type="text", max_length=80, label="Dune pattern", group="site",
              help="The one pattern that this site stands for."),
        Field(name="dune_rule", type="choice", vocabulary="dune_rule", label="How dunes are chosen", group="site",
              help="Set before reading."),
        Field(name="target_half_width_deg", type="number", unit="deg", minimum=0.5, maximum=90, decimals=1,
              label="Target half-width", group="site", help="Where it differs from the survey's."),
        Field(name="expected_facing_deg", type="direction", unit="deg", decimals=1, label="Expected facing",
              group="site", help="Direction slip faces should face towards; set before reading."),
        Field(name="note", type="text", max_length=2000, label="Note", group="site",
              help="Access, hazards, what to look for."),
        Field(name="crossed_out", type="text", max_length=200, label="Crossed out because", group="site",
              help="The reason; empty while the site stands."),
    ),
)

PHOTO: Final = Sheet(
    kind="photo",
    label="Photo",
    fields=(
        Field(name="observation", type="reference", refers_to="observation", label="Observation", group="photo",
              required=True, help="The observation it belongs to."),
        Field(name="sha256", type="text", max_length=64, label="Content hash", group="photo", required=True,
              help="SHA-256 of the file as stored, in hexadecimal."),
        Field(name="bytes", type="integer", minimum=1, maximum=100_000_000, label="Size", unit="bytes",
              group="photo", help="Length of the file."),
        Field(name="width_px", type="integer", minimum=1, maximum=100_000, label="Width", unit="px",
              group="photo", help="Width of the picture."),
        Field(name="height_px", type="integer", minimum=1, maximum=100_000, label="Height", unit="px",
              group="photo", help="Height of the picture."),
        Field(name="bearing_deg", type="direction", unit="deg", decimals=1, label="Looking towards", group="photo",
              help="True bearing that the camera looked along."),
        Field(name="taken_at", type="time", clocked=True, label="Taken at", group="photo", help="UTC."),
        Field(name="crossed_out", type="text", max_length=200, label="Crossed out because", group="photo",
              help="The reason; empty while the photo stands."),
    ),
)

TRACK: Final = Sheet(
    kind="track",
    label="Track",
    fields=(
        Field(name="name", type="text", max_length=120, label="Name", group="track", required=True,
              help="Name of the track."),
        Field(name="crew", type="reference", refers_to="crew", label="Walked by", group="track",
              help="Who carried the device."),
        Field(name="part", type="integer", minimum=1, maximum=10_000, label="Part", group="track",
              help="Long tracks are kept in parts of at most 1,000 points."),
        Field(name="points", type="points", label="Points", group="track", required=True,
              help="Latitude, longitude, altitude (m) and UTC time of each point."),
        Field(name="crossed_out", type="text", max_length=200, label="Crossed out because", group="track",
              help="The reason; empty while the track stands."),
    ),
)

SAME_DUNE: Final = Sheet(
    kind="same_dune",
    label="One dune",
    fields=(
        Field(name="site", type="reference", refers_to="site", label="Site", group="same_dune", required=True,
              help="The site on which the dune lies."),
        Field(name="dune", type="text", max_length=40, label="Dune", group="same_dune", required=True,
              help="The device that numbered it and its number, as device/3."),
        Field(name="other", type="text", max_length=40, label="The same dune", group="same_dune", required=True,
              help="What another device called it."),
        Field(name="crossed_out", type="text", max_length=200, label="Crossed out because", group="same_dune",
              help="The reason; empty while the two are one."),
    ),
)

SHEETS: Final = {sheet.kind: sheet for sheet in (SURVEY, CREW, SITE, OBSERVATION, PHOTO, TRACK, SAME_DUNE)}

PHONE_KINDS: Final = frozenset({"observation", "photo", "track"})
"""What a phone may say; the rest is the lead's."""


def label_in(kind: str, name: str) -> str:
    """A field's label; its name where the sheet does not know it."""
    field = SHEETS[kind].by_name.get(name)
    return field.label if field else name
