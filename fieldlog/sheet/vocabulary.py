"""The words a field may hold, each with a one-line definition.

A value never changes meaning under its name; it is retired and another is added.
Grain sizes: Wentworth (1922), "A scale of grade and class terms for clastic sediments",
Journal of Geology 30, 377-392, limits in mm; phi = -log2(mm), Krumbein (1934).
The other definitions are common practice of the trade, no source.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final


@dataclass(frozen=True)
class Word:
    """One value: its wire name, what the screen shows, and what it means."""

    value: str
    label: str
    definition: str
    retired: bool = False


def _words(*rows: tuple[str, str, str]) -> tuple[Word, ...]:
    return tuple(Word(*row) for row in rows)


VOCABULARIES: Final[dict[str, tuple[Word, ...]]] = {
    "bedform_order": _words(
        ("megaripple", "megaripple", "Coarse-grained ripple, decimetres high, metres apart"),
        ("dune", "dune", "A single dune, the order usually read"),
        ("superimposed", "superimposed dune", "A smaller dune riding on a larger one"),
        ("draa", "draa", "A very large compound form that carries dunes"),
    ),
    "face": _words(
        ("main", "main", "The face that the dune's shape was built by"),
        ("secondary", "secondary", "Another face of the same dune, of a second wind"),
        ("reversed_cap", "reversed cap", "A small face turned round at the crest by the last winds"),
    ),
    "dune_type": _words(
        ("barchan", "barchan", "Crescent, horns pointing downwind"),
        ("barchanoid", "barchanoid ridge", "Crescents joined side by side into a ridge"),
        ("transverse", "transverse", "Straight ridge square to the wind"),
        ("linear", "linear", "Long ridge along the resultant, faces alternate"),
        ("star", "star", "Three or more arms from a central peak"),
        ("parabolic", "parabolic", "U-shape, arms pointing upwind, usually held by plants"),
        ("dome", "dome", "Round or oval mound without a slip face"),
        ("reversing", "reversing", "Ridge whose slip face changes sides with the season"),
        ("climbing", "climbing", "Sand banked against the windward side of a slope"),
        ("falling", "falling", "Sand banked in the lee of a slope"),
        ("zibar", "zibar", "Low rolling form of coarse sand without a slip face"),
        ("none", "none", "No dune here"),
    ),
    "dune_rule": _words(
        ("all", "all dunes", "Every dune of the site is read"),
        ("transect", "transect", "The dunes that a line laid beforehand crosses"),
        ("random_point", "random point", "The dune nearest to each of a set of random points"),
        ("judgement", "judgement", "Dunes chosen by eye: say so in the report"),
    ),
    "fix_method": _words(
        ("averaged", "averaged", "Mean of several fixes taken while standing still"),
        ("single", "single fix", "One fix of the phone"),
        ("typed", "typed", "Coordinates typed in from another device or a map"),
        ("track", "from a track", "Placed along a recorded track by its time"),
    ),
    "north": _words(
        ("magnetic", "magnetic", "Compass left at zero declination: read from magnetic north"),
        ("true", "true", "Read from true north"),
        ("grid", "grid", "Read from the map grid's north"),
        ("set", "compass set", "The compass itself is set for the declination: reads true"),
    ),
    "how_read": _words(
        ("hand_compass", "hand compass", "Sighted with a hand compass"),
        ("phone_sighting", "phone sighting", "Sighted with the phone's own compass"),
    ),
    "crest_place": _words(
        ("horn", "horn", "Towards the tip of an arm"),
        ("middle", "middle", "Middle of the crest"),
        ("arm", "arm", "One arm of a star, parabolic or compound dune"),
    ),
    "slip_face_looking": _words(
        ("down", "down the face", "Compass pointed down the slope, the way the face faces"),
        ("up", "up the face", "Compass pointed up the slope: 180 degrees are added"),
    ),
    "slip_face_state": _words(
        ("active", "active", "Fresh avalanches, sharp brink"),
        ("degraded", "degraded", "Rounded, crusted or overgrown"),
    ),
    "grain_class": _words(
        ("silt_clay", "silt and clay", "below 0.0625 mm; above 4 phi"),
        ("very_fine_sand", "very fine sand", "0.0625-0.125 mm; 4 to 3 phi"),
        ("fine_sand", "fine sand", "0.125-0.25 mm; 3 to 2 phi"),
        ("medium_sand", "medium sand", "0.25-0.5 mm; 2 to 1 phi"),
        ("coarse_sand", "coarse sand", "0.5-1 mm; 1 to 0 phi"),
        ("very_coarse_sand", "very coarse sand", "1-2 mm; 0 to -1 phi"),
        ("granule", "granule", "2-4 mm; -1 to -2 phi"),
        ("pebble", "pebble", "4-64 mm; -2 to -6 phi"),
        ("cobble", "cobble", "64-256 mm; -6 to -8 phi"),
        ("boulder", "boulder", "above 256 mm; below -8 phi"),
    ),
    "sorting": _words(
        ("very_well", "very well sorted", "One size by the comparator"),
        ("well", "well sorted", "Nearly one size"),
        ("moderate", "moderately sorted", "A main size and its neighbours"),
        ("poor", "poorly sorted", "Several sizes"),
        ("very_poor", "very poorly sorted", "All sizes mixed"),
    ),
    "surface_type": _words(
        ("loose_sand", "loose sand", "Sand that a footprint moves"),
        ("sand_sheet", "sand sheet", "Flat to gently rolling sand without dunes"),
        ("gravel_plain", "gravel plain (serir)", "Plain of rounded gravel"),
        ("stone_pavement", "stone pavement (reg)", "Closely set stones one layer deep over fines"),
        ("boulder_strewn", "boulder-strewn", "Boulders lie on the surface"),
        ("bedrock", "bedrock", "Bare rock"),
        ("silt_clay_crust", "silt or clay crust", "Hard or curled fine-grained crust"),
        ("salt_crust", "salt crust (sabkha)", "Salt-cemented ground, often damp beneath"),
        ("duricrust", "gypcrete or calcrete", "Ground cemented by gypsum or lime"),
        ("damp_ground", "damp ground", "Wet enough to hold sand"),
        ("soft_dust", "soft dust", "Powder that a boot sinks into"),
    ),
    "landform": _words(
        ("dune_field", "dune field", "Dunes close enough to belong together"),
        ("interdune", "interdune", "Floor between dunes"),
        ("zibar_field", "zibar", "Low rolling coarse sand without slip faces"),
        ("sand_ramp", "sand ramp", "Sand, talus and wash banked on a slope"),
        ("alluvial_fan", "alluvial fan", "Cone of wash deposits at a mountain front"),
        ("bajada", "bajada", "Fans grown together into an apron"),
        ("pediment", "pediment", "Gently sloping rock-cut surface"),
        ("hamada", "hamada plateau", "Rocky upland plain"),
        ("wash_channel", "wash channel", "Bed of an ephemeral stream: flash floods"),
        ("playa", "playa", "Flat floor of a dry lake"),
        ("yardang_field", "yardang field", "Wind-cut ridges of soft rock"),
        ("nebkha_field", "nebkha field", "Sand mounds held by plants"),
    ),
    "dune_position": _words(
        ("windward_slope", "windward slope", "The gentler slope that faces the wind"),
        ("crest", "crest", "Highest line of the dune"),
        ("brink", "brink", "Upper edge of the slip face"),
        ("slip_face", "slip face", "Avalanche slope in the lee"),
        ("plinth", "plinth", "Gentle foot of a large dune"),
        ("horn", "horn", "Low tip of an arm"),
        ("interdune", "interdune", "Floor between dunes"),
    ),
    "activity": _words(
        ("active", "active", "Bare, moving sand"),
        ("partly_fixed", "partly fixed", "Plants or crust hold part of it"),
        ("fixed", "fixed", "Plants or crust hold it all"),
    ),
}


def word(vocabulary: str, value: str) -> Word | None:
    """The word of `vocabulary` whose wire name is `value`, or None."""
    return next((w for w in VOCABULARIES[vocabulary] if w.value == value), None)


def label_of(vocabulary: str, value: str) -> str:
    """What the screen shows for `value`; the value itself where the word is not known."""
    found = word(vocabulary, value)
    return found.label if found else value
