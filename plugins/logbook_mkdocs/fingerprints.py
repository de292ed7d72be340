"""What each page depends on, as a fingerprint: `serve --dirty` rebuilds the pages whose fingerprint has changed."""

from __future__ import annotations

import sys
from collections.abc import Callable, Mapping
from hashlib import sha256

import numpy as np

from logbook.book import Book, SourceFile
from logbook.findings import Delta, Regression, Todo
from logbook.hardware import Chain
from logbook.model import Entry, Parts, Result
from logbook.pages import block_pieces, revision_path
from logbook.pieces import Piece
from logbook.revision import Revision

# What blocks of these kinds show is marked by what it comes from: to make the pieces of a thousand entries takes too
# long. Any other kind is marked by its very pieces, which hold what it took from files and from other entries.
_MARKED = frozenset({"chain", "change", "bench", "reading", "target", "accept", "todo"})

# Blocks that show what belongs to the whole revision; a page without them shows less of it.
_OF_REVISION = frozenset({"chain", "change", "target", "accept"})

Pages = Mapping[str, Callable[[], list[Piece]]]


def fingerprints(book: Book, sources: Mapping[str, SourceFile], pages: Pages) -> dict[str, str]:
    """A fingerprint for each entry and page; `pages` are the pages that the logbook makes, with what makes them."""
    with np.printoptions(threshold=sys.maxsize):
        return _fingerprints(book, sources, pages)


def _fingerprints(book: Book, sources: Mapping[str, SourceFile], pages: Pages) -> dict[str, str]:
    marks = _Marks(book)
    found = {path: _digest(source.data.decode("utf-8", "replace")) for path, source in sources.items()}
    for index, entry in enumerate(book.entries):
        near = book.entries[max(0, index - 1) : index + 2]
        names = [(e.path, e.title, e.date.isoformat()) for e in near]
        found[entry.path] = _digest(found[entry.path], repr(names), marks.of_entry(entry))
    revisions = {revision_path(label): revision for label, revision in book.revisions.items()}
    for path, make in pages.items():
        # A page for each revision: making them all takes too long, too.
        shown = marks.of_revision(revisions[path]) if path in revisions else repr(make())
        found[path] = _digest(found.get(path, ""), shown)
    return found


def _digest(*parts: str) -> str:
    digest = sha256()
    for part in parts:
        digest.update(part.encode("utf-8", "surrogatepass") + b"\0")
    return digest.hexdigest()


def _of_parts(parts: Parts | None) -> int:
    # Marks live no longer than the process, so that Python's own hash will do: a tenth of the time of the text.
    return 0 if parts is None else hash(tuple(parts.items()))


def _of_result(result: Result) -> str:
    # Python's own hash again; but nan has another one each time, and its text has not.
    read = (repr(result.value), repr(result.shown), result.corrections, result.repeats, result.conditions)
    said = (result.read_as, result.bound, result.words, result.notes)
    return f"{result.key} {result.line} {hash(read)} {hash(said)} {_of_parts(result.parts)}"


def _of_delta(delta: Delta) -> str:
    said = f"{delta.key} {delta.from_} {delta.before!r} {delta.after!r} {delta.delta!r} {delta.u!r}"
    # Of what was predicted alone no budget is shown.
    parts = (delta.parts_before, delta.parts_after) if delta.after_result is not None else ()
    return f"{said} {delta.verdict} {delta.why} {[_of_parts(each) for each in parts]}"


class _Marks:
    """The marks of revisions and results, each made once."""

    def __init__(self, book: Book) -> None:
        self.book = book
        self._chains: dict[int, str] = {}
        self._todo: dict[str, list[Todo]] = {}
        for item in book.findings.todo:
            for path in dict.fromkeys((item.opened, item.closed or "")):
                self._todo.setdefault(path, []).append(item)
        self._worse: dict[str, list[Regression]] = {}
        for regression in book.findings.regressions:
            self._worse.setdefault(regression.to, []).append(regression)
        self._revisions: dict[int, str] = {}
        self._results: dict[str, list[str]] = {}
        self._of_revision: dict[str, list[str]] = {}
        self._read_on: dict[str, set[tuple[str, str]]] = {}
        self._titles = {entry.path: f"{entry.path} {entry.title} {entry.date}" for entry in book.entries}
        self._collect()

    def _collect(self) -> None:
        """Everything that speaks of an entry's results, by entry, and of a revision's.

        What was predicted for them and how far they spread follows from them and from the chains.
        """
        for result in self.book.calculated.of_blocks:
            mark = _of_result(result)
            self._results.setdefault(result.entry, []).append(mark)
            self._of_revision.setdefault(result.revision, []).append(mark)
            self._read_on.setdefault(result.entry, set()).add((result.revision, result.chain))
        for delta in (d for deltas in self.book.findings.read.values() for d in deltas):
            if delta.after_result is not None:
                self._results.setdefault(delta.after_result.entry, []).append(_of_delta(delta))

    def of_revision(self, revision: Revision | None) -> str:
        """All that a page says of a revision."""
        if revision is None:
            return ""
        known = self._revisions.get(id(revision))
        if known is None:
            known = self._revisions[id(revision)] = self._made(revision)
        return known

    def _made(self, revision: Revision) -> str:
        findings, label = self.book.findings, revision.label
        parent = self.book.revisions.get(revision.comes_from or "")
        chains = [self._chain(chain) for chain in revision.chains.values()]
        chains += [self._chain(chain) for chain in (parent.chains.values() if parent is not None else ())]
        said = [_of_delta(delta) for delta in findings.read.get(label, ())]
        said += self._of_revision.get(label, ())
        said += [f"{r.key} {r.accepted} {r.why}" for r in findings.regressions_of(label)]
        for each in (label, revision.comes_from or ""):
            said += [f"{v.target.key} {v.value!r} {v.verdict} {v.target.written}" for v in findings.targets_of(each)]
        entries = [self._titles[path] for path in revision.entries]
        head = f"{label} {revision.comes_from} {revision.state} {revision.date} {revision.made} {revision.alternatives}"
        plan = self.of_revision(revision.planned)
        return _digest(repr(self.book.settings), head, plan, repr(sorted(revision.broken)), *entries, *chains, *said)

    def _chain(self, chain: object) -> str:
        known = self._chains.get(id(chain))
        if known is None:
            known = self._chains[id(chain)] = _digest(repr(chain))
        return known

    def of_entry(self, entry: Entry) -> str:
        """All that an entry's page says besides its own text."""
        book = self.book
        shown = [repr(block_pieces(book, entry, block)) for block in entry.blocks if block.kind not in _MARKED]
        todo = [repr(each) for each in self._todo.get(entry.path, ())]
        problems = [str(p) for p in book.problems if p.place.file == entry.path] if len(book.problems) else []
        revision = book.history.of(entry)
        whole = any(block.kind in _OF_REVISION for block in entry.blocks)
        said = self.of_revision(revision) if whole else self._brief(revision, entry)
        chains = [self._chain(chain) for chain in self._chains_read(entry)]
        return _digest(said, *self._results.get(entry.path, ()), *chains, *shown, *todo, *problems)

    def _chains_read(self, entry: Entry) -> list[Chain]:
        """The chains that this entry's results are held against."""
        revisions = self.book.revisions
        read_on = sorted(self._read_on.get(entry.path, ()))
        chains = (revisions[label].chains.get(name) for label, name in read_on if label in revisions)
        return [chain for chain in chains if chain is not None]

    def _brief(self, revision: Revision | None, entry: Entry) -> str:
        """What an entry that only reads says of its revision: the line under its title, and what has got worse."""
        if revision is None:
            return ""
        keys = self.book.findings.compared_in.get(entry.path, set())
        worse = [r for r in self._worse.get(revision.label, ()) if r.key in keys]
        said = [f"{r.key} {r.kind} {r.delta!r} {r.from_} {r.accepted} {r.why}" for r in worse]
        head = f"{revision.label} {revision.comes_from} {revision.state} {revision.entry} {self.book.settings}"
        return _digest(head, *said)
