"""Comparison of a summary with a vector: relative 1e-9, p values 1e-6."""

from __future__ import annotations

from typing import Any

from tests.mirror import assert_same

NO_SCALE = 1e-9
"""Below this, numbers are rounding noise about zero."""


def camel(options: dict[str, Any]) -> dict[str, Any]:
    """Python's option names as JavaScript's."""
    names = {}
    for name, value in options.items():
        first, *rest = name.split("_")
        names[first + "".join(part.capitalize() for part in rest)] = value
    return names


def assert_same_summary(got: dict[str, Any], expected: dict[str, Any], at: str) -> None:
    """Equal to 1e-9, p values to 1e-6 of their size."""
    p_values = {key for key in expected if key.endswith("_p")}
    nested = {"second_order", "by_readings"}
    assert set(got) == set(expected), at
    for key, value in expected.items():
        if key in p_values:
            assert_same(got[key], value, relative=1e-6, absolute=1e-13, at=f"{at}: {key}")
        elif key in nested and value is not None:
            assert_same_summary(got[key], value, f"{at}: {key}")
        else:
            assert_same(got[key], value, relative=1e-9, absolute=NO_SCALE, at=f"{at}: {key}")
