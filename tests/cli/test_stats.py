"""`ergbook stats` and `ergbook compare` as a person calls them."""

from __future__ import annotations

import json
import math
from pathlib import Path

import pytest

from tests.cli.ergbook import ergbook

LEANS = "45 55 81 96 110 117 132 154\n"
KEYS = [
    "n", "axial", "mean_direction_deg", "median_direction_deg", "resultant_length", "circular_variance",
    "circular_sd_deg", "angular_deviation_deg", "kappa", "kappa_corrected", "ci95_low_deg", "ci95_high_deg",
    "ci_method", "rayleigh_z", "rayleigh_p", "v_u", "v_p", "kuiper_v", "watson_u2", "kuiper_p", "watson_p",
    "rao_u_deg", "rao_p", "modes", "readings_needed", "bedforms", "between_bedform_sd_deg",
    "within_bedform_sd_deg", "bedforms_needed", "outcome", "finding", "notes",
]  # fmt: skip


def stats_json(*arguments: str, given: str) -> dict:
    ran = ergbook("stats", "-", "--json", *arguments, given=given)
    assert ran.returncode == 0, ran.stderr
    return json.loads(ran.stdout)


def test_a_plain_list_from_standard_input_gives_every_key() -> None:
    said = stats_json(given=LEANS)
    assert set(KEYS) <= set(said)
    # Zar 2010, example 26.4 as quoted in tests/published/circular.json, S01
    assert said["mean_direction_deg"] == pytest.approx(98.9877519504)
    assert said["rayleigh_z"] == pytest.approx(5.448, abs=5e-4)
    assert said["readings_needed"] is None
    assert said["bedforms"] is None


def test_the_table_starts_with_the_finding_and_draws_a_rose() -> None:
    ran = ergbook("stats", "-", given=LEANS)
    assert ran.returncode == 0
    assert ran.stdout.startswith("Readings point towards 99 +/- 36 deg: 8 readings, one direction.")
    assert " N   0 deg" in ran.stdout
    assert "Readings taken as independent." in ran.stdout
    assert "null" not in ran.stdout
    assert "None" not in ran.stdout


def test_options_change_what_they_say(tmp_path: Path) -> None:
    table = tmp_path / "dunes.csv"
    rows = [f"{dune},{angle}" for dune, angles in enumerate([(10, 14), (20, 24), (5, 9), (30, 28), (12, 13)]) for angle in angles]
    table.write_text("dune,deg\n" + "\n".join(rows) + "\n", encoding="utf-8")
    plain = json.loads(ergbook("stats", str(table), "--column", "deg", "--json").stdout)
    by_dune = json.loads(ergbook("stats", str(table), "--column", "deg", "--bedform", "dune", "--json").stdout)
    assert plain["bedforms"] is None
    assert by_dune["bedforms"] == 5
    assert by_dune["n"] == plain["n"] == 10
    assert by_dune["ci95_half_width_deg"] > plain["ci95_half_width_deg"], "dunes, not readings, make the interval"
    more = ["--column", "deg", "--bedform", "dune", "--json", "--target", "30", "--against", "10", "--subject", "Crests"]
    full = json.loads(ergbook("stats", str(table), *more, "--axial", "--step", "2").stdout)
    assert full["axial"] is True
    assert full["enough"] is True
    assert full["v_p"] < 0.05
    assert full["finding"].startswith("Crests trend ")
    assert any("2 deg classes" in note for note in full["notes"])
    few = json.loads(ergbook("stats", str(table), *more, "--fewest", "6").stdout)
    assert few["outcome"] == "too_few"
    assert few["ci95_low_deg"] is None


@pytest.mark.parametrize(
    ("given", "arguments", "said"),
    [
        ("", (), "there are no readings"),
        ("deg\n", (), "there are no readings"),
        ("10\n20\nabc\n", (), "line 3: 'abc' is not a finite number"),
        ("10\n\nnan\n", (), "line 3: 'nan' is not a finite number"),
        ("inf\n", (), "line 1: 'inf' is not a finite number"),
        ("12x\n13\n", (), "line 1: '12x' is not a number"),
        ("a,b\n1,2\n", (), "the file has several columns"),
        ("a,b\n1,2\n", ("--column", "c"), "there is no column 'c'"),
        ("a,b\n1,2\n3,x\n", ("--column", "b"), "line 3: 'x' is not a finite number"),
        ("1 2 3\n", ("--column", "b"), "the file has no header"),
        ("1 2 3\n", ("--step", "0"), "--step"),
    ],
)
def test_wrong_input_ends_with_2_and_says_where(given: str, arguments: tuple[str, ...], said: str) -> None:
    ran = ergbook("stats", "-", *arguments, given=given)
    assert ran.returncode == 2
    assert said in ran.stderr
    assert "Traceback" not in ran.stderr
    assert ran.stdout == ""


def test_a_missing_file_ends_with_2() -> None:
    ran = ergbook("stats", "no_such_file.csv")
    assert ran.returncode == 2
    assert "no_such_file.csv: there is no such file" in ran.stderr


@pytest.mark.parametrize("given", ["37\n", "10\n50\n"])
def test_one_or_two_readings_end_with_0_and_nulls(given: str) -> None:
    said = stats_json("--target", "10", given=given)
    assert said["outcome"] == "too_few"
    for key in ("ci95_low_deg", "kuiper_p", "watson_p", "rao_p", "readings_needed"):
        assert said[key] is None, key
    assert said["enough"] is False


def test_spreadsheets_of_other_countries_are_read() -> None:
    said = stats_json("--column", "deg", given="\ufeffsite;deg\nA;10,5\nA;12,5\nA;\n")
    assert said["n"] == 2
    assert said["mean_direction_deg"] == pytest.approx(11.5)
    assert "1 row without a value left out." in said["notes"]


def test_angles_beyond_one_turn_are_reduced_and_noted() -> None:
    said = stats_json(given="370 -10 5\n")
    assert said["mean_direction_deg"] == pytest.approx(math.degrees(math.atan2(math.sin(math.radians(5)), 2 * math.cos(math.radians(10)) + math.cos(math.radians(5)))))
    assert "2 angles beyond 0 to 360 deg brought back to one turn." in said["notes"]


def test_compare_gives_samples_tests_and_a_sentence(tmp_path: Path) -> None:
    table = tmp_path / "sites.csv"
    # Zar 2010, example 27.8 as quoted in tests/published/circular.json, S07: F 1.86, p 0.19
    samples = {"A": (135, 145, 125, 140, 165, 170), "B": (150, 130, 175, 190, 180, 220), "C": (140, 165, 185, 180, 125, 175, 140)}
    table.write_text("site,deg\n" + "".join(f"{k},{v}\n" for k, vs in samples.items() for v in vs), encoding="utf-8")
    ran = ergbook("compare", str(table), "--by", "site", "--column", "deg", "--json")
    said = json.loads(ran.stdout)
    assert [s["name"] for s in said["samples"]] == ["A", "B", "C"]
    tests = {t["name"]: t for t in said["tests"]}
    assert set(tests) == {"watson_williams", "mardia_watson_wheeler", "equal_concentration"}
    assert tests["watson_williams"]["statistic"] == pytest.approx(1.86, abs=0.01)
    assert tests["watson_williams"]["p"] == pytest.approx(0.19, abs=0.005)
    assert tests["watson_williams"]["df"] == [2, 16]
    assert said["sentence"].startswith("No difference shown between A, B and C")
    assert set(tests["watson_williams"]) == {"name", "statistic", "df", "p", "p_method", "assumption_ok", "note"}


def test_compare_permutes_whole_dunes(tmp_path: Path) -> None:
    table = tmp_path / "dunes.csv"
    lines = [f"{site},{site}{dune},{base + 12 * dune + k}\n" for site, base in (("A", 10), ("B", 34)) for dune in range(4) for k in range(5)]
    table.write_text("site,dune,deg\n" + "".join(lines), encoding="utf-8")
    call = ["compare", str(table), "--by", "site", "--column", "deg", "--json"]
    readings = json.loads(ergbook(*call).stdout)
    dunes = json.loads(ergbook(*call, "--bedform", "dune").stdout)
    p = {name: next(t["p"] for t in said["tests"] if t["name"] == "watson_u2_two_sample") for name, said in (("readings", readings), ("dunes", dunes))}
    assert p["dunes"] > 0.05 > p["readings"]
    assert dunes["samples"][0]["bedforms"] == 4
    table_text = ergbook("compare", str(table), "--by", "site", "--column", "deg", "--axial").stdout
    assert "Axes: means are halved back" in table_text


def test_compare_refuses_one_sample() -> None:
    ran = ergbook("compare", "-", "--by", "site", "--column", "deg", given="site,deg\nA,1\nA,2\n")
    assert ran.returncode == 2
    assert "there is only one sample" in ran.stderr
