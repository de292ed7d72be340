"""The structure of the house, held against the code: floors, sizes, and an engine that runs without MkDocs."""

from __future__ import annotations

import ast
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
ENGINE = ROOT / "logbook"
PLUGIN = ROOT / "plugins" / "logbook_mkdocs"

# The picture in DEVELOPERS.md. A room imports from lower floors; inside a package there is no circle.
FLOORS: tuple[frozenset[str], ...] = tuple(
    frozenset(rooms.split())
    for rooms in (
        "problems units quantities pieces cache physics quantity_display yaml_faults",
        "quantity_faults fences yaml_nodes traces",
        "quantity entry_text",
        "model",
        "fields hardware budget",
        "bench revision prediction stage_fields spurs detector rules sweep",
        "findings terms emissions",
        "compare plots",
        "kind",
        "showing html terminal",
        "kinds",
        "book",
        "results pages guide options",
        "failing",
        "cli",
        "logbook_mkdocs __main__",
    )
)


def modules() -> list[Path]:
    return sorted([*ENGINE.rglob("*.py"), *PLUGIN.rglob("*.py")])


def room_of(path: Path) -> str:
    if PLUGIN in path.parents:
        return "logbook_mkdocs"
    return path.relative_to(ENGINE).parts[0].removesuffix(".py")


def floor_of(room: str) -> int:
    return next(floor for floor, rooms in enumerate(FLOORS) if room in rooms)


def imports(path: Path) -> set[str]:
    """Full names of the modules that a file imports, of this project only."""
    found: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: imports are absolute"
            found.add(node.module or "")
    return {name for name in found if name.split(".")[0] in ("logbook", "logbook_mkdocs")}


def test_every_room_has_a_floor() -> None:
    rooms = {room_of(path) for path in modules()} - {"__init__"}
    assert rooms == set().union(*FLOORS)


@pytest.mark.parametrize("path", modules(), ids=lambda p: p.relative_to(ROOT).as_posix())
def test_imports_go_down(path: Path) -> None:
    own = room_of(path)
    if own == "__init__":
        return
    for name in imports(path):
        parts = name.split(".")
        other = "logbook_mkdocs" if parts[0] == "logbook_mkdocs" else (parts[1] if len(parts) > 1 else "__init__")
        if other in (own, "__init__"):
            continue
        assert floor_of(other) < floor_of(own), f"{own} (floor {floor_of(own)}) imports {name} ({floor_of(other)})"


def test_no_circles() -> None:
    """No module can be reached from itself by imports; a package's face stands for the modules it hands on."""
    names = {".".join(p.relative_to(ROOT).with_suffix("").parts): p for p in ENGINE.rglob("*.py")}
    arrows = {name.removesuffix(".__init__"): imports(path) for name, path in names.items()}
    done: set[str] = set()

    def walk(name: str, above: tuple[str, ...]) -> None:
        assert name not in above, " -> ".join([*above, name])
        if name in done:
            return
        for other in arrows.get(name, ()):
            walk(other, (*above, name))
        done.add(name)

    for name in arrows:
        walk(name, ())


@pytest.mark.parametrize("path", modules(), ids=lambda p: p.relative_to(ROOT).as_posix())
def test_rooms_are_small(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    assert text.count("\n") <= 300
    assert "TYPE_CHECKING" not in text
    for node in ast.walk(ast.parse(text)):
        if isinstance(node, ast.FunctionDef):
            assert (node.end_lineno or 0) - node.lineno < 50, f"{node.name} is longer than 50 lines"


def test_engine_runs_without_mkdocs() -> None:
    """Every module of the engine is imported where MkDocs cannot be, and Matplotlib is not touched on the way."""
    names = sorted(".".join(p.relative_to(ROOT).with_suffix("").parts) for p in ENGINE.rglob("*.py"))
    names = [name for name in names if not name.endswith("__main__")]
    code = (
        "import sys; sys.modules['mkdocs'] = None; sys.modules['jinja2'] = None\n"
        f"import importlib\nfor name in {names!r}: importlib.import_module(name.removesuffix('.__init__'))\n"
        "assert not any(m.split('.')[0] == 'matplotlib' for m in sys.modules)\n"
    )
    subprocess.run([sys.executable, "-c", code], check=True, cwd=ROOT)
