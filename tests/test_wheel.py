"""What is installed: the two packages, whole, and nothing else."""

from __future__ import annotations

import shutil
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
PACKAGES = {"logbook": ROOT / "logbook", "logbook_mkdocs": ROOT / "plugins" / "logbook_mkdocs"}
BUILD = "from setuptools import build_meta; build_meta.build_wheel({folder!r})"


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> zipfile.ZipFile:
    """The wheel, built by setuptools from a copy: building leaves folders behind."""
    folder = tmp_path_factory.mktemp("wheel")
    source = folder / "source"
    source.mkdir()
    for name in ("pyproject.toml", "README.md", "LICENSE"):
        shutil.copy(ROOT / name, source)
    for name in ("logbook", "plugins", "entries", "tests"):
        shutil.copytree(ROOT / name, source / name, ignore=shutil.ignore_patterns("__pycache__"))
    command = [sys.executable, "-c", BUILD.format(folder=str(folder))]
    done = subprocess.run(command, cwd=source, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    (file,) = folder.glob("*.whl")
    return zipfile.ZipFile(file)


def expected() -> set[str]:
    return {
        f"{package}/{path.relative_to(folder).as_posix()}"
        for package, folder in PACKAGES.items()
        for path in folder.rglob("*")
        if path.is_file() and "__pycache__" not in path.parts
    }


def test_the_wheel_holds_the_two_packages_and_nothing_else(wheel: zipfile.ZipFile) -> None:
    tops = {name.partition("/")[0] for name in wheel.namelist()}
    (info,) = [name for name in tops if name.endswith(".dist-info")]
    assert info.startswith("signal_chain_logbook-")
    assert tops == {"logbook", "logbook_mkdocs", info}
    held = {name for name in wheel.namelist() if not name.startswith(info)}
    assert held == expected()


def test_the_data_that_the_packages_read_is_among_it(wheel: zipfile.ZipFile) -> None:
    names = set(wheel.namelist())
    assert {
        "logbook/py.typed",
        "logbook/results.schema.json",
        "logbook_mkdocs/py.typed",
        "logbook_mkdocs/assets/logbook.css",
        "logbook_mkdocs/assets/iframe-worker.js",
    } <= names
    rules = {path.name for path in (ROOT / "logbook" / "rules").glob("*.yml")}
    assert {f"logbook/rules/{name}" for name in rules} <= names


def test_the_command_and_the_plugin_are_announced(wheel: zipfile.ZipFile) -> None:
    (points,) = [name for name in wheel.namelist() if name.endswith("entry_points.txt")]
    lines = wheel.read(points).decode().split("\n")
    assert "logbook = logbook.cli:main" in lines
    assert "logbook = logbook_mkdocs.plugin:LogbookPlugin" in lines


def test_the_licence_is_in_it(wheel: zipfile.ZipFile) -> None:
    (file,) = [name for name in wheel.namelist() if name.rpartition("/")[2] == "LICENSE"]
    assert wheel.read(file).decode() == (ROOT / "LICENSE").read_text(encoding="utf-8")
