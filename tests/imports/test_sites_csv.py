"""Reading sites from CSV (RFC 4180, and what spreadsheets make of it)."""

from __future__ import annotations

import pytest

from fieldlog.imports.found import ImportFileError
from fieldlog.imports.sites_csv import read_sites

ONE = {"name": "North", "lat_deg": -20.5, "lon_deg": 10.25}


@pytest.mark.parametrize(
    "text",
    [
        "name,latitude,longitude\r\nNorth,-20.5,10.25\r\n",
        "\ufeffsite;lat;lon\nNorth;-20,5;10,25\n",
        "Name\tlat_deg\tlon_deg\n\nNorth\t-20.5\t10.25",
        'lon,name,lat,colour\n10.25,"North",-20.5,red\n',
    ],
)
def test_separators_names_of_columns_and_decimal_commas(text: str) -> None:
    found = read_sites(text.encode())
    assert [values for _, values in found.sites] == [ONE]
    assert not found.refused


def test_other_columns_of_a_site_are_read_and_unknown_ones_named() -> None:
    text = "name,lat,lon,radius_m,dune_rule,note,colour\n'=A1,1,2,300,transect,\"two\nlines\",red\n"
    found = read_sites(text.encode())
    assert found.sites[0][1] == {
        "name": "=A1", "lat_deg": 1.0, "lon_deg": 2.0, "radius_m": 300.0, "dune_rule": "transect", "note": "two\nlines",
    }
    assert "colour" in found.notes[0]


def test_a_wrong_row_is_refused_by_itself_with_its_line() -> None:
    text = "name,lat,lon\nA,1,2\nB,north,2\nC,3,4,5\n,5,6\nE,1e999,2\n"
    found = read_sites(text.encode())
    assert [values["name"] for _, values in found.sites if "name" in values] == ["A"]
    assert [row.where.split(" (")[0] for row in found.refused][:2] == ["line 3", "line 4"]
    assert "line 6" in {row.where.split(" (")[0] for row in found.refused}


@pytest.mark.parametrize(
    ("data", "said"),
    [
        (b"", "no column"),
        (b"name,lat\nA,1\n", "lon"),
        (b"name,lat,lon,latitude\nA,1,2,3\n", "twice"),
        ("name,lat,lon\nÉ,1,2".encode("latin-1"), "UTF-8"),
        (b"PK\x03\x04\x00\x00", "no text"),
        (b'name,lat,lon\n"A"x,1,2\n', "no CSV"),
    ],
)
def test_what_cannot_be_read_is_said(data: bytes, said: str) -> None:
    with pytest.raises(ImportFileError) as refused:
        read_sites(data)
    assert said in str(refused.value)
    assert refused.value.mend
