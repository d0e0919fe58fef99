"""Several samples compared: the tests that suit them, one sentence, and pairs with Holm's correction."""

from __future__ import annotations

from collections.abc import Hashable, Iterable, Mapping, Sequence
from dataclasses import asdict, dataclass
from itertools import combinations
from typing import Any, Final

from fieldlog.science import bedforms as by_bedform
from fieldlog.science import compare
from fieldlog.science.angles import Angles, SampleError, apart, checked, reduced, reduced_one
from fieldlog.science.finding import counted, join
from fieldlog.science.moments import mean_and_length

LEVEL: Final = 0.05
NAMES: Final = {
    "watson_williams": "Watson-Williams",
    "mardia_watson_wheeler": "Mardia-Watson-Wheeler",
    "watson_u2_two_sample": "Watson U2 for two samples",
}


@dataclass(frozen=True)
class Described:
    """One sample; degrees as shown. With bedforms, mean and length rest on them."""

    name: str
    n: int
    mean_direction_deg: float | None
    resultant_length: float
    bedforms: int | None


@dataclass(frozen=True)
class Pair:
    """Two of three or more samples: p of the test that suits them, alone and corrected."""

    first: str
    second: str
    test: str
    p: float
    p_holm: float
    apart_deg: float | None


@dataclass(frozen=True)
class Compared:
    """What `ergbook compare` says; `pairs` is empty for two samples."""

    samples: list[Described]
    tests: list[compare.Comparison]
    pairs: list[Pair]
    sentence: str
    notes: list[str]

    def as_json(self) -> dict[str, Any]:
        """Plain values; the keys of `ergbook compare --json`."""
        keys = ("name", "statistic", "df", "p", "p_method", "assumption_ok", "note")
        said = asdict(self)
        said["tests"] = [{key: test[key] for key in keys} for test in said["tests"]]
        return said


def compare_samples(
    samples: Mapping[str, Iterable[float]],
    *,
    bedforms: Mapping[str, Sequence[Hashable]] | None = None,
    axial: bool = False,
) -> Compared:
    """Compare two or more samples of directions, or axes, by name.

    `samples`: degrees by name. `bedforms`: a name per reading, by the same names; dunes are then
    compared by their mean directions, and the permutations move whole dunes. Raises SampleError for
    fewer than two samples and for an empty one. Tests are not given below three directions in a
    sample: the notes say so.
    """
    if len(samples) < 2:
        raise SampleError("there is only one sample", "samples", "Give two or more to compare.")
    fold = 2 if axial else 1
    units: dict[str, Angles] = {}
    described = []
    for name, given in samples.items():
        angles = reduced(checked(given, what=f"{name}, reading") * fold)
        if len(angles) == 0:
            raise SampleError("the sample is empty", name, "Give at least one reading.")
        groups = None if bedforms is None else by_bedform.gather(angles, bedforms[name])
        units[name] = angles if groups is None else groups.means_deg
        mean, r = mean_and_length(units[name])
        shown = None if mean is None else reduced_one(mean / fold, 360.0 / fold)
        described.append(Described(name, len(angles), shown, r, None if groups is None else groups.groups))
    said = _notes(described, axial=axial)
    small = [d.name for d in described if len(units[d.name]) < compare.FEWEST_EACH]
    if small:
        unit = "readings" if bedforms is None else "dunes"
        sentence = f"Too few to compare: {join(small)} {'has' if len(small) == 1 else 'have'} fewer than 3 {unit}."
        return Compared(described, [], [], sentence, said)
    tests = _tests(list(units.values()))
    pairs = _pairs(units, fold) if len(units) > 2 else []
    return Compared(described, tests, pairs, _sentence(described, tests, pairs, fold), said)


def _tests(units: Sequence[Angles]) -> list[compare.Comparison]:
    tests = [compare.watson_williams(units), compare.mardia_watson_wheeler(units)]
    if len(units) == 2:
        tests.append(compare.watson_u2_two_sample(units))
    return [*tests, compare.equal_concentration(units)]


def _deciding(tests: Sequence[compare.Comparison]) -> compare.Comparison:
    """Watson-Williams where its assumptions hold, else the two-sample U2, else the uniform scores."""
    if tests[0].assumption_ok and tests[0].p is not None:
        return tests[0]
    return next((t for t in tests if t.name == "watson_u2_two_sample"), tests[1])


def _pairs(units: Mapping[str, Angles], fold: int) -> list[Pair]:
    found = []
    for (a, first), (b, second) in combinations(units.items(), 2):
        test = _deciding(_tests([first, second]))
        found.append((a, b, test.name, test.p if test.p is not None else 1.0, _apart(first, second, fold)))
    corrected = compare.holm([p for _, _, _, p, _ in found])
    return [Pair(a, b, name, p, q, off) for (a, b, name, p, off), q in zip(found, corrected, strict=True)]


def _apart(first: Angles, second: Angles, fold: int) -> float | None:
    a, b = mean_and_length(first)[0], mean_and_length(second)[0]
    return None if a is None or b is None else apart(a, b) / fold


def _sentence(
    described: Sequence[Described], tests: Sequence[compare.Comparison], pairs: Sequence[Pair], fold: int
) -> str:
    test = _deciding(tests)
    if test.p is None:
        return "The samples cannot be compared: they do not vary."
    by = f"({NAMES[test.name]}, {p_text(test.p)})"
    names = join([d.name for d in described])
    if test.p > LEVEL:
        return f"No difference shown between {names} {by}; that is no proof that they are the same."
    means = [d.mean_direction_deg for d in described]
    if len(described) == 2 and means[0] is not None and means[1] is not None:
        off = apart(means[0], means[1], 360.0 / fold)
        return f"{described[0].name} and {described[1].name} differ {by}: their means are {off:.0f} deg apart."
    differing = [f"{pair.first} from {pair.second}" for pair in pairs if pair.p_holm <= LEVEL]
    which = f": {join(differing)}" if differing else ", though no pair does on its own"
    return f"{names} differ {by}{which}."


def p_text(p: float) -> str:
    """A p value as a sentence has it."""
    return "p < 0.001" if p < 0.001 else f"p = {p:.3f}"


def _notes(described: Sequence[Described], *, axial: bool) -> list[str]:
    said = []
    if described[0].bedforms is None:
        said.append("Readings taken as independent.")
    else:
        total = sum(d.bedforms or 0 for d in described)
        said.append(f"Dunes are compared, not readings: {counted(total, 'dune')}; permutations move whole dunes.")
    if axial:
        said.append("Axes: means are halved back to axes; tests are on the doubled angles.")
    return said
