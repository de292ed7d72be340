"""From a file's text to an entry with its blocks; every fault is kept with its place."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from datetime import date
from pathlib import Path

from logbook.book.sources import SourceFile, source_paths
from logbook.entry_text import EntryText, Fence, decode, scan
from logbook.fields import Asked, read_mapping
from logbook.kind import Kind
from logbook.model import BUILT, STATES, Block, Entry, Values
from logbook.problems import Place, Problem, Problems, did_you_mean
from logbook.yaml_nodes import Mapping as YamlMapping
from logbook.yaml_nodes import Node, Scalar, Sequence, read_yaml

OWN_KEYS = ("title", "date", "revision", "from", "state")

# Keys of other readers of the same front matter, never taken for a slip of the pen.
_OTHER_KEYS = frozenset(
    """tags description hide template icon status subtitle search comments author authors categories draft slug
    social image robots links readtime pin data dates""".split()  # noqa: SIM905 - a list of words reads as words
)

_LABEL = re.compile(r"[\w][\w .+-]{0,39}")


@dataclass(frozen=True, slots=True)
class ReadFile:
    """A Markdown file as read: its entry, or None for an ordinary page."""

    path: str
    text: EntryText
    entry: Entry | None


def read_file(source: SourceFile, kinds: Mapping[str, Kind], problems: Problems) -> ReadFile:
    """Read one file; whatever is wrong in it is in `problems`."""
    written = scan(decode(source.data, source.path, problems), source.path, problems, kinds)
    front = _front(written, problems)
    blocks = tuple(
        _block(source.path, number, fence, kinds, problems) for number, fence in enumerate(written.fences, start=1)
    )
    if front is None:
        return ReadFile(source.path, written, None)
    return ReadFile(source.path, written, _entry(source.path, front, blocks, problems))


Read = Callable[[SourceFile, Mapping[str, Kind], Problems], ReadFile]


class Remembering:
    """Reads files as `read_file` does, but one whose bytes are as before only once: for books made again and again."""

    def __init__(self) -> None:
        self._sources: dict[str, tuple[tuple[int, int], SourceFile]] = {}
        self._known: dict[str, tuple[SourceFile, ReadFile, tuple[Problem, ...]]] = {}

    def find(self, folder: Path) -> list[SourceFile]:
        """The sources beneath a folder; a file whose time and size are as before is not opened again."""
        found: dict[str, tuple[tuple[int, int], SourceFile]] = {}
        for path in source_paths(folder):
            known, stat = self._sources.get(path), (folder / path).stat()
            state = (stat.st_mtime_ns, stat.st_size)
            if known is None or known[0] != state:
                known = (state, SourceFile(path, (folder / path).read_bytes()))
            found[path] = known
        self._sources = found
        return [source for _, source in found.values()]

    def read(self, source: SourceFile, kinds: Mapping[str, Kind], problems: Problems) -> ReadFile:
        """Read one file; the kinds must be the same every time."""
        known = self._known.get(source.path)
        if known is None or known[0] != source:
            found = Problems()
            known = self._known[source.path] = (source, read_file(source, kinds, found), tuple(found))
        problems.extend(known[2])
        return known[1]


def _front(written: EntryText, problems: Problems) -> YamlMapping | None:
    """The front matter of an entry; None for an ordinary page."""
    if written.front is None:
        _date_missing(written, problems)
        return None
    node = read_yaml(written.front, written.path, written.front_line, 0, problems, "front matter")
    if node is None:
        return None
    if not isinstance(node, YamlMapping):
        problems.add(node.place, "front-matter", "Front matter holds keys with values, such as 'title: First light'.")
        return None
    for key, _ in node.pairs:
        if key.text not in OWN_KEYS and key.text not in _OTHER_KEYS:
            hint = did_you_mean(key.text, OWN_KEYS)
            if hint.startswith("Did"):
                problems.add(key.place, "unknown-key", f"'{key.text}' is no key of an entry's front matter.", hint)
    if node.get("date") is None:
        _date_missing(written, problems)
        return None
    return node


def _date_missing(written: EntryText, problems: Problems) -> None:
    """Blocks count only in an entry, and an entry has a date; front matter that was not found is reported already."""
    said = any(problem.code == "front-matter" for problem in problems.within(written.path, 1, len(written.lines)))
    if written.fences and not said:
        place = Place(written.path, written.fences[0].line)
        message = "This file holds blocks and its front matter gives no date, so they are not computed."
        hint = "Begin the file with '---', 'title: ...', 'date: 2026-05-09', '---'."
        problems.add(place, "no-date", message, hint)


def _entry(path: str, front: YamlMapping, blocks: tuple[Block, ...], problems: Problems) -> Entry | None:
    places = {key.text: value.place for key, value in front.pairs}
    words = {key: _word(front, key, problems) for key in OWN_KEYS}
    day = _date(words["date"], places.get("date"), problems)
    state = words["state"] or BUILT
    if state not in STATES:
        message = f"'{state}' is no state of a revision; expected {', '.join(STATES)}."
        hint = did_you_mean(state, STATES)
        problems.add(places["state"], "state", message, hint if hint.startswith("Did") else "")
        state = BUILT
    for key in ("revision", "from"):
        label = words[key]
        if label is not None and not _LABEL.fullmatch(label):
            message = f"'{label}' at '{key}': a label is up to 40 letters, digits, spaces or . + - _ ."
            problems.add(places[key], "label", message)
            words[key] = None
    if day is None:
        return None
    title = words["title"] or path.rsplit("/", 1)[-1].removesuffix(".md")
    if words["title"] is None:
        problems.add(front.place, "missing-key", "An entry needs the key 'title'.", "Such as 'title: First light'.")
    return Entry(path, title, day, words["revision"], words["from"], state, places, blocks)


def _word(front: YamlMapping, key: str, problems: Problems) -> str | None:
    node = front.get(key)
    if node is None:
        return None
    if isinstance(node, Scalar) and node.text.strip():
        return node.text.strip()
    problems.add(node.place, "not-text", f"'{key}' in the front matter needs a plain value.")
    return None


def _date(written: str | None, place: Place | None, problems: Problems) -> date | None:
    if written is None or place is None:
        return None
    try:
        if not re.fullmatch(r"\d{4}-\d{2}-\d{2}", written):
            raise ValueError(written)
        return date.fromisoformat(written)
    except ValueError:
        problems.add(place, "date", f"'{written}' is no date; expected one such as 2026-05-09.")
        return None


def _block(path: str, number: int, fence: Fence, kinds: Mapping[str, Kind], problems: Problems) -> Block:
    block = Block(path, fence.kind, number, fence.line, fence.last_line, fence.text)
    kind = kinds.get(fence.kind)
    if kind is None:
        hint = did_you_mean(fence.kind, kinds)
        problems.add(block.place, "unknown-kind", f"'{fence.kind}' is no kind of block.", hint)
        return block
    if not fence.closed:
        # What follows an unclosed fence is prose as likely as YAML: one fault is enough.
        return block
    before = len(problems)
    node = read_yaml(fence.text, path, fence.first_line, fence.indent, problems)
    items = () if node is None else _items(node, kind, problems)
    return replace(block, items=items) if len(problems) == before else block


def _items(node: Node, kind: Kind, problems: Problems) -> tuple[Values, ...]:
    article = "an" if kind.word[0] in "aeio" else "a"
    asked = Asked(f"{article} {kind.word} block", problems)
    if isinstance(node, Sequence) and kind.many:
        read = [read_mapping(item, kind.fields, asked) for item in node.items]
    elif isinstance(node, Sequence):
        problems.add(node.place, "not-mapping", f"A {kind.word} block holds one mapping of keys, not a list.")
        return ()
    else:
        read = [read_mapping(node, kind.fields, asked)]
    return tuple(values for values in read if values is not None)
