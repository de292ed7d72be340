"""The hardware's history: entry after entry, which revision it speaks of, and what its blocks declare."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from typing import Any

from logbook.bench import Bench
from logbook.book.labels import Labels
from logbook.book.making import make_chains
from logbook.findings import Accept, Part, Target, TodoWords
from logbook.hardware import Chain
from logbook.kind import Kind, ReadFile, Session
from logbook.model import Block, Entry
from logbook.prediction import Prediction, Terms
from logbook.problems import Problems
from logbook.revision import Revision

BlockKey = tuple[str, int]


@dataclass(slots=True)
class History:
    """What the entries declare, in their order."""

    entries: list[Entry] = field(default_factory=list)
    revisions: dict[str, Revision] = field(default_factory=dict)
    benches: dict[str, dict[str, Bench]] = field(default_factory=dict)
    targets: dict[str, Target] = field(default_factory=dict)
    accepts: list[Accept] = field(default_factory=list)
    todo: list[tuple[Entry, TodoWords]] = field(default_factory=list)
    parts: list[Part] = field(default_factory=list)
    declared: dict[BlockKey, list[Any]] = field(default_factory=dict)

    def ancestors(self, label: str) -> list[Revision]:
        """The revision's parents, nearest first; stops where the line is broken."""
        found: list[Revision] = []
        seen = {label}
        current = self.revisions.get(label)
        while current is not None and current.comes_from is not None and current.comes_from not in seen:
            seen.add(current.comes_from)
            current = self.revisions.get(current.comes_from)
            if current is not None:
                found.append(current)
        return found

    def of(self, entry: Entry) -> Revision | None:
        """The revision that an entry speaks of. A plan's own entries keep the plan, even when it is built later."""
        revision = self.revisions.get(entry.speaks_of or "")
        if revision is not None and revision.planned is not None and entry.path in revision.planned.entries:
            return revision.planned
        return revision


Reader = Callable[[str], ReadFile]


def read_history(
    entries: list[Entry],
    kinds: Mapping[str, Kind],
    problems: Problems,
    reader: Reader,
    predict: Callable[[Chain, Terms], Prediction],
) -> History:
    """Walk through the entries by date; hardware, benches, targets and items are declared on the way."""
    history = History()
    labels = Labels(history.revisions, problems)
    benches: dict[str, Bench] = {}
    for entry in sorted(entries, key=lambda e: (e.date, e.path)):
        revision = labels.revision_for(entry)
        if revision is not None:
            revision.entries.append(entry.path)
        named = replace(entry, speaks_of=revision.label if revision is not None else None)
        history.entries.append(named)
        maker = _Maker(history, kinds, problems, reader, predict, named, revision, benches)
        maker.declare_all()
        history.benches[entry.path] = dict(benches)
    return history


@dataclass(slots=True)
class _Maker:
    """Declares the blocks of one entry."""

    history: History
    kinds: Mapping[str, Kind]
    problems: Problems
    reader: Reader
    predict: Callable[[Chain, Terms], Prediction]
    entry: Entry
    revision: Revision | None
    benches: dict[str, Bench]

    def declare_all(self) -> None:
        """Benches first, so that blocks above its bench know it; then the hardware; then what speaks of both."""
        blocks = [b for b in self.entry.blocks if b.kind in self.kinds]
        making = [b for b in blocks if b.kind in ("chain", "change")]
        for block in (b for b in blocks if b.kind == "bench"):
            self._declare(block)
        for block in making:
            self._declare(block)
        if self.revision is not None:
            declared = [(b, self.history.declared.get((b.entry, b.number), [])) for b in making]
            make_chains(self.entry, self.revision, self.history.revisions, declared, self.problems)
        for block in (b for b in blocks if b.kind not in ("bench", "chain", "change")):
            self._declare(block)

    def session(self, block: Block) -> Session:
        """What a block may use while it is declared: the chains as far as they are made, else those of the parent."""
        return Session(
            entry=self.entry,
            block=block,
            revision=self.revision,
            chains=_chains_before(self.revision, self.history.revisions),
            benches=self.benches,
            problems=self.problems,
            read_file=self.reader(self.entry.path),
            predict=self.predict,
        )

    def _declare(self, block: Block) -> None:
        kind = self.kinds[block.kind]
        if kind.needs_revision and self.revision is None:
            if self.entry.revision is None and "revision" not in self.entry.places:
                message = f"A {kind.word} block speaks of a revision, and none is built up to {self.entry.date}."
                self.problems.add(
                    block.place, "no-revision", message, "Add 'revision: A' to the front matter.", about="revision"
                )
            return
        if kind.declare is None:
            return
        session = self.session(block)
        found = [kind.declare(values, session) for values in block.items]
        sound = [each for each in found if each is not None]
        self.history.declared[(block.entry, block.number)] = sound
        for each in sound:
            self._keep(each)

    def _keep(self, found: Any) -> None:
        if isinstance(found, Bench):
            self._once(
                self.benches.get(found.name), found, f"Bench '{found.name}' is described", "Keep one of the two."
            )
            self.benches[found.name] = found
        elif isinstance(found, Target):
            hint = "Write both limits as one, such as '40 dB .. 44 dB', or give one of them a name or frequency."
            self._once(self.history.targets.get(found.key), found, f"A target for {found.key} is set", hint)
            self.history.targets[found.key] = found
        elif isinstance(found, Accept):
            self.history.accepts.append(found)
        elif isinstance(found, Part):
            self.history.parts.append(found)
        elif isinstance(found, TodoWords):
            self.history.todo.append((self.entry, found))

    def _once(self, earlier: Bench | Target | None, found: Bench | Target, what: str, hint: str) -> None:
        """A later entry may replace what an earlier one says; within one entry it is a slip."""
        if earlier is not None and earlier.place.file == found.place.file:
            message = f"{what} already in line {earlier.place.line} of this entry."
            self.problems.add(found.place, "said-twice", message, hint)


def _chains_before(revision: Revision | None, revisions: Mapping[str, Revision]) -> Mapping[str, Chain]:
    if revision is None:
        return {}
    parent = revisions.get(revision.comes_from or "")
    inherited = parent.chains if parent is not None else {}
    return {**inherited, **revision.chains}
