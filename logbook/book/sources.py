"""The files of a logbook: Markdown sources, and the files that blocks name."""

from __future__ import annotations

import os
from dataclasses import dataclass
from pathlib import Path, PurePosixPath

from logbook.kind import ReadFile
from logbook.problems import Place, Problems, did_you_mean


@dataclass(frozen=True, slots=True)
class SourceFile:
    """A Markdown file: its path within the logbook, with forward slashes, and its bytes."""

    path: str
    data: bytes


def find_sources(folder: Path) -> list[SourceFile]:
    """All Markdown files beneath a folder, hidden ones left out, sorted by path."""
    return [SourceFile(path, (folder / path).read_bytes()) for path in source_paths(folder)]


def source_paths(folder: Path) -> list[str]:
    """Where they are within the folder, with forward slashes."""
    found: list[PurePosixPath] = []
    for here, folders, files in os.walk(folder):
        folders[:] = [name for name in folders if not name.startswith(".")]
        inside = PurePosixPath(*Path(here).relative_to(folder).parts)
        found += [inside / name for name in files if name.endswith(".md") and not name.startswith(".")]
    return [str(path) for path in sorted(found)]


def file_reader(folder: Path | None, entry: str, problems: Problems) -> ReadFile:
    """Reads files that the blocks of one entry name; their paths are relative to the entry and stay in the logbook."""

    def read(file: str, place: Place) -> bytes | None:
        inside = _inside(entry, file)
        if inside is None or folder is None:
            message = f"'{file}' lies outside the logbook."
            problems.add(place, "path", message, "Name a file in the logbook's folder, relative to this entry.")
            return None
        path = folder / inside
        problems.file_named(inside, place)
        try:
            if not path.resolve().is_relative_to(folder.resolve()):
                problems.add(place, "path", f"'{file}' leads out of the logbook by a link.")
                return None
            return path.read_bytes()
        except (OSError, ValueError) as error:
            reason = getattr(error, "strerror", None) or "not a usable path"
            problems.add(place, "file", f"'{file}' cannot be read: {reason}.", _near(path))
            return None

    return read


def _inside(entry: str, file: str) -> str | None:
    """The path of a file within the logbook, or None when it leads out of it."""
    written = PurePosixPath(file.replace("\\", "/"))
    if written.is_absolute() or ":" in file or "\0" in file:
        return None
    parts: list[str] = list(PurePosixPath(entry).parent.parts)
    for part in written.parts:
        if part != "..":
            parts.append(part)
        elif not parts:
            return None
        else:
            parts.pop()
    return "/".join(parts)


def _near(path: Path) -> str:
    try:
        names = sorted(p.name for p in path.parent.iterdir() if p.is_file())
    except (OSError, ValueError):
        return ""
    hint = did_you_mean(path.name, names)
    return hint if hint.startswith("Did") else ""
