"""Which room may import which outside package: a package that is everywhere cannot be changed."""

from __future__ import annotations

import ast
from collections.abc import Iterator

import pytest

from tests.conftest import ROOT
from tests.house.files import name_of, ours

DATABASE = ("fieldlog/store/", "/models.py", "/service.py")
PAGES = ("fieldlog/web/", "/views.py", "fieldlog/store/db.py")
ALLOWED = {
    "flask": PAGES, "flask_limiter": PAGES, "flask_login": PAGES, "flask_sqlalchemy": PAGES, "flask_wtf": PAGES,
    "sqlalchemy": DATABASE, "alembic": ("fieldlog/store/",), "psycopg": ("fieldlog/store/",),
    "marshmallow": ("/schema.py", "/views.py"), "apispec": ("fieldlog/web/openapi.py",),
    "click": ("fieldlog/cli/",), "cheroot": ("fieldlog/cli/serve.py",),
    "numpy": ("fieldlog/science/", "fieldlog/exports/"), "scipy": ("fieldlog/science/",),
    "pyproj": ("fieldlog/science/geodesy.py",), "pygeomag": ("fieldlog/science/magnetic.py",),
    "gpxpy": ("fieldlog/exports/gpx.py", "fieldlog/imports/gpx.py"), "pyogrio": ("fieldlog/exports/geopackage.py",),
    "PIL": ("fieldlog/store/photos.py", "fieldlog/draw/icons.py"), "segno": ("fieldlog/cli/demo.py", "/views.py"),
}  # fmt: skip
"""Package -> where it may be imported: a folder, an ending of a path, or a module."""


def imports() -> Iterator[tuple[str, str, list[str]]]:
    """Module, outside package and the names taken from it, wherever in the module it stands."""
    for path in ours(".py"):
        module = name_of(path)
        if not module.startswith("fieldlog/"):
            continue
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.ImportFrom) and node.module:
                yield module, node.module.partition(".")[0], [alias.name for alias in node.names]
            elif isinstance(node, ast.Import):
                for alias in node.names:
                    yield module, alias.name.partition(".")[0], []


FOUND = list(imports())


@pytest.mark.parametrize("package", ALLOWED)
def test_a_package_stays_in_its_rooms(package: str) -> None:
    strangers = {
        module
        for module, name, _ in FOUND
        if name == package and not any(module.startswith(place) or module.endswith(place) for place in ALLOWED[package])
    }
    assert not strangers


def test_a_view_takes_no_more_of_the_schemas_than_their_error() -> None:
    taken = {name for module, package, names in FOUND if package == "marshmallow" and module.endswith("/views.py") for name in names}
    assert taken <= {"Schema", "ValidationError"}
    declared = {
        name_of(path)
        for path in ours(".py")
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8")))
        if isinstance(node, ast.ClassDef) and any("Schema" in ast.unparse(base) for base in node.bases)
    }
    assert declared
    assert all(module.endswith("/schema.py") for module in declared)


def test_the_numbers_know_nothing_of_the_rest() -> None:
    rooms = {"science": {"errors", "science"}, "draw": {"errors", "science", "draw"}}
    for room, allowed in rooms.items():
        for path in sorted((ROOT / "fieldlog" / room).glob("*.py")):
            for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
                if isinstance(node, ast.ImportFrom) and (node.module or "").startswith("fieldlog."):
                    assert (node.module or "").split(".")[1] in allowed, f"{name_of(path)} imports {node.module}"
