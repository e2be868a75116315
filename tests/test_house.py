"""The house: imports run one way, each outside library comes in by its own door, and the README tells the truth."""

from __future__ import annotations

import ast
import re
import subprocess
import sys
from pathlib import Path

import pytest

import edgetally
from edgetally.errors import EdgetallyError
from edgetally.findings import CODES, Finding
from edgetally.output.symbols import KEYS

ROOT = Path(__file__).parent.parent
SOURCE = ROOT / "src" / "edgetally"

# from the outside in; a module may import from its own room and from those after it
ROOMS = [
    "cli",
    "audit",
    "output",
    "survey",
    "compare",
    "analysis",
    "composing",
    "doubts",
    "lettered",
    "measuring",
    "results",
    "section",
    "outline",
    "drawing",
    "curves",
    "findings",
    "units",
    "errors",
]
DOORS = {
    "ezdxf": ["drawing"],
    "shapely": ["outline"],
    "click": ["cli"],
    "reportlab": ["output"],
    "openpyxl": ["output"],
}
NEVER = {("section", "drawing"), ("outline", "drawing")}


def room_of(path: Path) -> str:
    first = path.relative_to(SOURCE).parts[0]
    return first.removesuffix(".py")


def imports(path: Path) -> list[tuple[str, bool]]:
    """(module, is it for type checking only) of every import in a file."""
    tree = ast.parse(path.read_text())
    typing_only = {
        id(node)
        for block in ast.walk(tree)
        if isinstance(block, ast.If) and "TYPE_CHECKING" in ast.dump(block.test)
        for node in ast.walk(block)
    }
    found = []
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            found += [(alias.name, id(node) in typing_only) for alias in node.names]
        elif isinstance(node, ast.ImportFrom) and node.module:
            found.append((node.module, id(node) in typing_only))
    return found


MODULES = sorted(p for p in SOURCE.rglob("*.py") if room_of(p) not in ("__init__", "__main__"))


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(SOURCE)))
def test_imports_run_one_way(path: Path) -> None:
    here = room_of(path)
    assert here in ROOMS, "a new room: give it its place in ROOMS and in DEVELOPERS.md"
    for module, typing_only in imports(path):
        parts = module.split(".")
        if parts[0] != "edgetally" or len(parts) == 1 or typing_only:
            continue
        there = parts[1]
        # a result hands itself to the document and the figure when asked to; the import waits until then
        if (here, there) == ("results", "output"):
            continue
        assert ROOMS.index(there) >= ROOMS.index(here), f"{here} imports {module}"
        assert (here, there) not in NEVER


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(SOURCE)))
def test_outside_libraries_come_in_by_their_own_door(path: Path) -> None:
    for module, _ in imports(path):
        door = DOORS.get(module.split(".")[0])
        assert door is None or room_of(path) in door, f"{path.name} imports {module}"


def test_only_the_command_line_prints_or_exits() -> None:
    for path in MODULES:
        if room_of(path) == "cli":
            continue
        for node in ast.walk(ast.parse(path.read_text())):
            if isinstance(node, ast.Call) and isinstance(node.func, ast.Name):
                assert node.func.id not in ("print", "exit", "quit"), path


def test_help_is_quick_to_load() -> None:
    """Heavy libraries are not loaded before a command needs them."""
    heavy = ("ezdxf", "numpy", "shapely", "reportlab", "openpyxl")
    code = f"import sys, edgetally.cli; print([m for m in {heavy} if m in sys.modules])"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_module_sizes() -> None:
    for path in SOURCE.rglob("*.py"):
        assert len(path.read_text().splitlines()) <= 400, f"{path} answers more than one question"


def test_every_finding_code_in_use_is_in_the_table_and_every_code_in_the_readme() -> None:
    with pytest.raises(ValueError, match="not in the table"):
        Finding("no-such-code", "note", "")
    source = "\n".join(path.read_text() for path in MODULES if room_of(path) != "findings")
    for code in re.findall(r'Finding\(\s*"([a-z-]+)"', source):
        assert code in CODES
    readme = (ROOT / "README.md").read_text()
    listed = dict(re.findall(r"^\| `([a-z-]+)` \| (.+?) \|$", readme, flags=re.M))
    assert {code: listed.get(code) for code in CODES} == CODES


def test_readme_lists_every_property() -> None:
    readme = (ROOT / "README.md").read_text()
    for key in KEYS:
        assert f"`{key}`" in readme


def test_top_level_holds_what_it_should() -> None:
    names = {p.name for p in ROOT.iterdir() if not p.name.startswith(".")}
    expected = {"README.md", "DEVELOPERS.md", "pyproject.toml", "src", "tests", "sample_drawings", "LICENSE"}
    assert expected <= names


def test_public_names_exist_and_errors_are_one_family() -> None:
    for name in edgetally.__all__:
        assert getattr(edgetally, name) is not None
    for name in ("UsageError", "DrawingError", "OutlineError", "OutputError"):
        error = getattr(edgetally, name)
        assert issubclass(error, EdgetallyError)
        assert error.exit_code == 2
    with pytest.raises(AttributeError):
        edgetally.nothing  # noqa: B018


def test_package_carries_its_types_and_its_fonts_licence() -> None:
    package = Path(edgetally.__file__).parent
    assert (package / "py.typed").exists()
    assert "Bitstream" in (package / "output" / "fonts" / "LICENSE-DejaVu.txt").read_text()
