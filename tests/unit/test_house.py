"""Who imports whom: the table of rooms, held against every import statement of the source, lazy ones too."""

from __future__ import annotations

import ast
import sys
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PACKAGE = ROOT / "linter" / "bandwright"

MAY_IMPORT: dict[str, tuple[str, ...]] = {
    "limits": (),
    "theory.closed_form": ("limits",),
    "theory.design": ("limits", "theory.closed_form"),
    "bandfile": ("limits",),
    "forecast.questions": ("theory.closed_form",),
    "forecast": ("limits", "theory.closed_form", "bandfile"),
    "remedies": ("limits", "bandfile", "forecast"),
    "findings": ("limits", "theory.closed_form", "bandfile", "forecast", "remedies"),
    "analysis": ("limits", "theory.closed_form", "bandfile", "forecast", "remedies", "findings"),
    "exact": ("limits", "theory", "forecast.questions"),
    "project": ("limits", "bandfile"),
    "drawings": ("limits", "theory.closed_form", "forecast"),
    "public": (
        "limits",
        "theory",
        "bandfile",
        "forecast",
        "remedies",
        "findings",
        "analysis",
        "exact",
        "project",
    ),
    "faces": (
        "limits",
        "theory",
        "bandfile",
        "forecast",
        "remedies",
        "findings",
        "analysis",
        "exact",
        "project",
        "drawings",
    ),
}
"""Room -> the other rooms that its modules may import. A name covers everything inside it."""

LIBRARIES: dict[str, tuple[str, ...]] = {
    "theory.design": ("numpy", "scipy"),
    "bandfile": ("ruamel",),
    "exact": ("numpy",),
    "faces.server": ("pygls", "lsprotocol", "cattrs"),
    "faces.command.formats.schemas": ("pydantic",),
}
"""Room or module -> the libraries that it may import; all others do with the standard library."""

COLD = (
    "theory.closed_form",
    "bandfile",
    "forecast",
    "remedies",
    "findings",
    "analysis",
    "project",
    "drawings",
    "faces.command",
)
"""Rooms on the way of a `check` that asks nothing: none of `NEVER_COLD` there, lazily or not."""

NEVER_COLD = ("asyncio", "logging", "concurrent", "multiprocessing")

MANY_FILES = "faces.command.parallel"
"""Loaded where there are enough files to be shared among processes."""

FACES = ("faces.server", "faces.command")
MODULES = sorted(PACKAGE.rglob("*.py"))


def name_of(file: Path) -> str:
    """`bandfile.reader` for `linter/bandwright/bandfile/reader.py`."""
    return ".".join(file.relative_to(PACKAGE).with_suffix("").parts).removesuffix(".__init__")


def inside(module: str, room: str) -> bool:
    return module == room or module.startswith(f"{room}.")


def imports(file: Path) -> Iterator[str]:
    """The full name of everything that a module imports, at its top or inside a function."""
    for node in ast.walk(ast.parse(file.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{file}: imports are absolute"
            assert node.module is not None
            for alias in node.names:
                as_module = f"{node.module}.{alias.name}"
                yield as_module if is_module(as_module) else node.module


def is_module(name: str) -> bool:
    path = ROOT.joinpath("linter", *name.split("."))
    return path.is_dir() or path.with_suffix(".py").is_file()


@pytest.mark.parametrize("file", MODULES, ids=name_of)
def test_a_module_imports_only_the_rooms_that_its_own_may(file: Path) -> None:
    module = name_of(file)
    if file.name == "__init__.py":
        return
    room = max((room for room in MAY_IMPORT if inside(module, room)), key=len, default=None)
    assert room is not None, f"{module} lies in no room of the table"
    for imported in imports(file):
        if not imported.startswith("bandwright."):
            continue
        other = imported.removeprefix("bandwright.")
        assert any(inside(other, allowed) for allowed in (room, *MAY_IMPORT[room])), (
            f"{module} imports {other}"
        )


@pytest.mark.parametrize("file", MODULES, ids=name_of)
def test_a_face_imports_no_other_face(file: Path) -> None:
    module = name_of(file)
    for face, other in (FACES, FACES[::-1]):
        if inside(module, face) and module != "faces.command.serve":  # its one line starts the server
            assert not [name for name in imports(file) if inside(name, f"bandwright.{other}")]


@pytest.mark.parametrize("file", MODULES, ids=name_of)
def test_a_module_imports_only_the_libraries_of_its_room(file: Path) -> None:
    module = name_of(file)
    allowed = {name for room, names in LIBRARIES.items() if inside(module, room) for name in names}
    foreign = {name.partition(".")[0] for name in imports(file)} - {"bandwright"} - sys.stdlib_module_names
    assert foreign <= allowed


@pytest.mark.parametrize("file", MODULES, ids=name_of)
def test_the_cold_rooms_leave_out_the_costly_parts_of_the_standard_library(file: Path) -> None:
    if any(inside(name_of(file), room) for room in COLD) and name_of(file) != MANY_FILES:
        assert not {name.partition(".")[0] for name in imports(file)} & set(NEVER_COLD)


def test_every_init_but_the_packages_own_is_empty() -> None:
    written = [
        file for file in MODULES if file.name == "__init__.py" and file.read_text(encoding="utf-8").strip()
    ]
    assert [file for file in written if file.parent != PACKAGE] == []


def test_every_library_is_declared() -> None:
    declared = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]["dependencies"]
    names = {line.partition("[")[0].partition(">")[0].partition(".")[0] for line in declared}
    used = {name for names in LIBRARIES.values() for name in names} - {
        "lsprotocol",
        "cattrs",
    }  # they come with pygls
    assert used == names


def test_the_programs_of_a_checkout_can_be_read_by_an_old_python() -> None:
    """So that it says which Python it takes, instead of a syntax error."""
    for file in (
        ROOT / "linter" / "__main__.py",
        ROOT / "linter" / "environment.py",
        ROOT / "tests" / "__main__.py",
    ):
        ast.parse(file.read_text(encoding="utf-8"), feature_version=(3, 8))
        assert {name.partition(".")[0] for name in imports(file)} <= sys.stdlib_module_names | {"environment"}
