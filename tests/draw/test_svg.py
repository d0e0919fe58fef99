"""SVG text: what the browser is given, and what a browser makes of the same shapes."""

from __future__ import annotations

from types import SimpleNamespace
from xml.etree import ElementTree as ET

from fieldlog.draw.rose import Rose, rose
from fieldlog.draw.svg import PAINT, number, path_data, svg
from tests.mirror import javascript

SVG = "{http://www.w3.org/2000/svg}"


def picture(finding: str = "") -> Rose:
    summary = SimpleNamespace(
        mean_direction_deg=214.0, resultant_length=0.9, threshold_resultant=0.5, ci95_low_deg=206.0,
        ci95_high_deg=222.0, modes=[{"direction_deg": 214.0}], outcome="one", finding=finding,
    )
    readings = [200.0, 205.0, 210.0, 214.0, 214.0, 220.0, 225.0, 230.0]
    return rose(readings, summary, axial=False, size=320, expected_deg=230.0, crossed_out_deg=[10.0], marked=[1])


def test_it_is_well_formed_and_has_its_text_twin() -> None:
    root = ET.fromstring(svg(picture(), identifier="site-7"))
    title, text = root[0], root[1]
    assert (title.tag, title.text) == (f"{SVG}title", "Rose of 8 directions.")
    assert text.tag == f"{SVG}desc"
    assert str(text.text).startswith("8 directions. Arrow towards 214 deg")
    assert root.get("role") == "img"
    assert root.get("aria-labelledby") == f"{title.get('id')} {text.get('id')}"
    assert root.get("class") == "rose rose-full"


def test_names_of_dunes_cannot_become_markup() -> None:
    text = svg(picture('<script>alert("x")</script> & more'), classes='a" onload="b')
    assert "<script" not in text
    assert 'onload="' not in text
    root = ET.fromstring(text)
    assert root[0].text == '<script>alert("x")</script> & more'


def test_there_is_nothing_that_the_security_policy_forbids() -> None:
    root = ET.fromstring(svg(picture()))
    for element in root.iter():
        assert element.tag not in (f"{SVG}script", f"{SVG}style")
        assert not [name for name in element.attrib if name == "style" or name.startswith("on")]


def test_the_phone_paints_and_writes_numbers_alike() -> None:
    values = [0.0, -0.001, 1.0, 12.345678, -3.1, 100.0, 2 / 3]
    commands = [["M", 1.5, 2.0], ["A", 10.0, 10.0, 0, 1, 1, 1 / 3, -0.004], ["Z"]]
    paint, data, *numbers = javascript("draw/svg.js", ["PAINT"], ["pathData", commands],
                                       *[["number", value] for value in values])
    assert paint == PAINT
    assert data == path_data(commands)
    assert numbers == [number(value) for value in values]


def test_every_role_that_is_drawn_has_paint() -> None:
    assert {shape["role"] for shape in picture().shapes} <= set(PAINT)
