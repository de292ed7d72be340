"""`logbook new`: a new entry, ready to be written on."""

from __future__ import annotations

import json
import re
import unicodedata
from collections.abc import Iterator
from contextlib import suppress
from datetime import date
from itertools import count
from pathlib import Path

from logbook.book import SourceFile, find_sources, make_book
from logbook.cli.place import find_place
from logbook.cli.status import IN_ORDER, UsageError
from logbook.cli.template import entry_text

_LONGEST_SLUG = 60
_LETTERS = str.maketrans(
    {"ß": "ss", "æ": "ae", "œ": "oe", "ø": "o", "ł": "l", "đ": "d", "ð": "d", "þ": "th", "ı": "i", "µ": "u"}
)


def new(title: str, path: str | None, day: str | None, revision: str | None, state: str | None) -> int:
    """Write a new entry and print its path; a file that is there already is never touched."""
    words = " ".join("".join(c for c in title if c.isspace() or _shown(c)).split())
    if not words:
        raise UsageError("An entry needs a title, such as: logbook new 'First light'")
    if state is not None and revision is None:
        raise UsageError("--state is the state of a revision; name it with --revision.")
    folder = find_place(path, may_be_new=True).folder
    name = f"{_date(day)}-{slug(words)}"
    text = _entry(folder, name, words, revision, state)
    print(_written(folder, name, text).as_posix())
    return IN_ORDER


def _shown(character: str) -> bool:
    """Control characters and the like have no place in a title; what joins letters or emoji has."""
    category = unicodedata.category(character)
    return character != "\ufeff" and (category[0] != "C" or category == "Cf")


def _date(written: str | None) -> date:
    if written is None:
        return date.today()
    try:
        if not re.fullmatch(r"\d{4}-\d{2}-\d{2}", written):
            raise ValueError(written)
        return date.fromisoformat(written)
    except ValueError:
        raise UsageError(f"'{written}' is no date; expected one such as 2026-05-09.") from None


def slug(title: str) -> str:
    """A title as part of a file's name: plain ASCII letters and digits, hyphens between them."""
    plain = unicodedata.normalize("NFKD", title.lower().translate(_LETTERS)).encode("ascii", "ignore").decode()
    words = re.findall(r"[a-z0-9]+", plain)
    short = ""
    for word in words:
        if short and len(short) + len(word) >= _LONGEST_SLUG:
            break
        short += f"-{word}" if short else word[:_LONGEST_SLUG]
    return short or "entry"


def _entry(folder: Path, name: str, title: str, revision: str | None, state: str | None) -> str:
    """The entry's text. One that names a revision is tried within the logbook: it must not bring a problem with it."""
    day = name[:10]
    if revision is None:
        return entry_text(quoted(title), day)
    sources = find_sources(folder) if folder.is_dir() else []
    before = make_book(sources, folder)
    known = before.revisions
    built = [label for label, each in known.items() if each.built and each.date <= day]
    parent = built[-1] if built and revision not in known else None
    text = entry_text(quoted(title), day, quoted(revision), parent and quoted(parent), state)
    tried = SourceFile(_free(folder, name).name, text.encode())
    already = set(before.problems)
    brought = [problem for problem in make_book([*sources, tried], folder).problems if problem not in already]
    if brought:
        raise UsageError(f"{brought[0].message} {brought[0].hint}".strip())
    return text


def _free(folder: Path, name: str) -> Path:
    """The first file of this name that is not there yet: with a number behind it when it needs one."""
    return next(file for file in _names(folder, name) if not file.exists())


def _names(folder: Path, name: str) -> Iterator[Path]:
    yield folder / f"{name}.md"
    for number in count(2):
        yield folder / f"{name}-{number}.md"


def quoted(text: str) -> str:
    """A text as YAML, in quotes where YAML would take it for something else."""
    plain = re.fullmatch(r"[A-Za-z][\w .,()/+-]*", text) and not text.endswith(" ")
    taken = text.lower() in ("true", "false", "yes", "no", "on", "off", "null", "y", "n")
    # A text in JSON's quotes is one in YAML's.
    return text if plain and not taken else json.dumps(text, ensure_ascii=False)


def _written(folder: Path, name: str, text: str) -> Path:
    try:
        folder.mkdir(parents=True, exist_ok=True)
        while True:
            file = _free(folder, name)
            # "x" makes the file or fails: two who start an entry at once do not overwrite each other.
            with suppress(FileExistsError), file.open("x", encoding="utf-8", newline="\n") as opened:
                opened.write(text)
                return file
    except OSError as error:
        raise UsageError(f"The entry cannot be written to '{folder}': {error.strerror}.") from error
