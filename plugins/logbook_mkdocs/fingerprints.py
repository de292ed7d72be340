"""What each page depends on, as a fingerprint: `serve --dirty` rebuilds the pages whose fingerprint has changed."""

from __future__ import annotations

import sys
from collections.abc import Mapping
from hashlib import sha256

import numpy as np

from logbook.book import Book, SourceFile
from logbook.model import Entry, Parts, Result
from logbook.pages import block_pieces
from logbook.pieces import Piece
from logbook.revision import Revision

# What blocks of these kinds show is marked by what it comes from: to make the pieces of a thousand entries takes too
# long. Any other kind is marked by its very pieces, which hold what it took from files and from other entries.
_MARKED = frozenset({"chain", "change", "bench", "reading", "target", "accept", "todo"})


Pages = Mapping[str, tuple[Piece, ...]]


def fingerprints(book: Book, sources: Mapping[str, SourceFile], pages: Pages) -> dict[str, str]:
    """A fingerprint for each entry and page; `pages` are the pages that the logbook makes, with their pieces."""
    with np.printoptions(threshold=sys.maxsize):
        return _fingerprints(book, sources, pages)


def _fingerprints(book: Book, sources: Mapping[str, SourceFile], pages: Pages) -> dict[str, str]:
    marks = _Marks(book)
    found = {path: _digest(source.data.decode("utf-8", "replace")) for path, source in sources.items()}
    for index, entry in enumerate(book.entries):
        near = book.entries[max(0, index - 1) : index + 2]
        names = [(e.path, e.title, e.date.isoformat()) for e in near]
        found[entry.path] = _digest(found[entry.path], repr(names), marks.of_entry(entry))
    for path, pieces in pages.items():
        found[path] = _digest(found.get(path, ""), repr(pieces))
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
    read = f"{result.shown!r} {result.corrections} {result.repeats} {result.conditions}"
    said = f"{result.bound} {result.words} {result.notes}"
    return f"{result.key} {result.revision} {result.value!r} {_of_parts(result.parts)} {read} {said}"


class _Marks:
    """The marks of revisions and results, each made once."""

    def __init__(self, book: Book) -> None:
        self.book = book
        self._chains: dict[int, str] = {}
        self._revisions: dict[int, str] = {}
        self._results: dict[str, list[str]] = {}
        self._collect()

    def _collect(self) -> None:
        """Everything that speaks of an entry's results, by entry."""
        for result in self.book.results:
            self._results.setdefault(result.entry, []).append(_of_result(result))
        for delta in self.book.findings.deltas:
            if delta.after_result is not None:
                said = f"{delta.from_} {delta.before!r} {delta.delta!r} {delta.u!r} {delta.verdict} {delta.why}"
                budget = f"{_of_parts(delta.parts_before)} {_of_parts(delta.parts_after)}"
                self._results.setdefault(delta.after_result.entry, []).append(f"{said} {budget}")
        for found in self.book.findings.agreement:
            said = f"{found.key} {found.measured!r} {found.u_measured!r} {found.predicted!r} {found.u_predicted!r}"
            self._results.setdefault(found.result.entry, []).append(f"{said} {found.verdict} {found.why}")

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
        said = [f"{d.key} {d.before!r} {d.delta!r} {d.u!r} {d.verdict} {d.why}" for d in findings.deltas_to(label)]
        said += [f"{r.key} {r.accepted} {r.why}" for r in findings.regressions_of(label)]
        for each in (label, revision.comes_from or ""):
            said += [f"{v.target.key} {v.value!r} {v.verdict} {v.target.written}" for v in findings.targets_of(each)]
        said += [f"{s.first.entry} {s.second.entry} {s.difference!r}" for s in findings.spreads if s.revision == label]
        head = f"{label} {revision.comes_from} {revision.state} {revision.entries} {revision.made} {revision.broken}"
        return _digest(head, *chains, *said)

    def _chain(self, chain: object) -> str:
        known = self._chains.get(id(chain))
        if known is None:
            known = self._chains[id(chain)] = _digest(repr(chain))
        return known

    def of_entry(self, entry: Entry) -> str:
        """All that an entry's page says besides its own text."""
        book = self.book
        shown = [repr(block_pieces(book, entry, block)) for block in entry.blocks if block.kind not in _MARKED]
        todo = [repr(t) for t in book.findings.todo if entry.path in (t.opened, t.closed)]
        problems = [str(p) for p in book.problems if p.place.file == entry.path] if len(book.problems) else []
        return _digest(
            self.of_revision(book.history.of(entry)), *self._results.get(entry.path, ()), *shown, *todo, *problems
        )
