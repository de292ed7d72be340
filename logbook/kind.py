"""What a kind of block is, what its calculation may use, and what its page may show."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from posixpath import dirname, join, normpath
from typing import Any

from logbook.bench import Bench
from logbook.compare.verdicts import Rules
from logbook.fields import Field
from logbook.findings import Findings
from logbook.hardware import Chain
from logbook.model import Block, Entry, Result, Values
from logbook.pieces import Piece
from logbook.prediction import Prediction, Terms
from logbook.problems import Place, Problems, did_you_mean
from logbook.revision import Revision

ReadFile = Callable[[str, Place], bytes | None]


@dataclass(frozen=True, slots=True)
class Outcome:
    """What a block comes to: its results, and whatever its own `show` needs."""

    results: tuple[Result, ...] = ()
    data: Any = None


@dataclass(frozen=True, slots=True)
class Session:
    """What a block may use when it is declared or calculated.

    `revision` is the one the entry speaks of (None before any is built); `chains` its chains; `benches` as they are on
    the entry's date; `read_file` gives the bytes of a file named in the block, or reports why not; `earlier` holds
    the outcomes of earlier blocks by (kind, name), latest last; `lost_chains` are names of chains that an ancestor
    has and that this revision lost to a fault.
    """

    entry: Entry
    block: Block
    revision: Revision | None
    chains: Mapping[str, Chain]
    benches: Mapping[str, Bench]
    problems: Problems
    read_file: ReadFile
    predict: Callable[[Chain, Terms], Prediction]
    earlier: Mapping[tuple[str, str], Sequence[Earlier]] = field(default_factory=dict)
    lost_chains: tuple[str, ...] = ()

    def fault(self, place: Place, code: str, message: str, hint: str = "", about: str = "") -> None:
        """Report a fault of this block; `about` names what was looked for and is not there."""
        self.problems.add(place, code, message, hint, about=about)

    def file_path(self, file: str) -> str:
        """The path within the logbook of a file that the entry names: where its own faults stand."""
        return normpath(join(dirname(self.entry.path), file.replace("\\", "/")))

    def chain_name(self, values: Values) -> str | None:
        """The chain that `values` speak of: the one named, or the only one; None with a fault when unclear."""
        named: str | None = values.get("chain")
        known = dict.fromkeys([*self.chains, *self.lost_chains])
        if named is None:
            if len(known) <= 1:
                return next(iter(known), "unit")
            message = "The hardware has several chains; say which one is meant."
            self.fault(values.start, "which-chain", message, "Add 'chain:' with one of " + ", ".join(known) + ".")
            return None
        if known and named not in known and not self.broken:
            message = f"'{named}' is no chain of revision {self.label}."
            self.fault(values.place("chain"), "unknown-chain", message, did_you_mean(named, known), named)
            return None
        return named

    @property
    def broken(self) -> bool:
        """Whether a chain of the revision could not be made, because of a fault elsewhere."""
        return self.revision is not None and bool(self.revision.broken)

    def bench_of(self, values: Values) -> Bench | None:
        """The bench that `values` name; None without one, or with a fault when it is not known on this date."""
        named = values.get("bench")
        if named is None:
            return None
        if named not in self.benches:
            message = f"No bench '{named}' is described up to {self.entry.date}."
            self.fault(values.place("bench"), "unknown-bench", message, did_you_mean(named, self.benches), named)
        return self.benches.get(named)

    @property
    def label(self) -> str:
        """The revision's label, or nothing."""
        return self.revision.label if self.revision is not None else ""


@dataclass(frozen=True, slots=True)
class Earlier:
    """An outcome of an earlier block of the same name, and the revision that it belongs to."""

    revision: str
    entry: Entry
    block: Block
    outcome: Outcome


@dataclass(frozen=True, slots=True)
class View:
    """What a block's page may show beside its own outcome."""

    entry: Entry
    block: Block
    revision: Revision | None
    revisions: Mapping[str, Revision]
    benches: Mapping[str, Bench]
    findings: Findings
    rules: Rules
    predict: Callable[[Chain, Terms], Prediction]
    earlier: Mapping[tuple[str, str], Sequence[Earlier]] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Kind:
    """A kind of block, declared by one file in `kinds`.

    `declare` turns one mapping into hardware, a bench, a target ... before anything is calculated; `calculate`
    yields the results; `show` the pieces for the page. A kind without them lists its fields, each compared by its
    direction.
    `more` is Markdown for the guide: what an example and a list of keys leave open.
    `name_key` is the field by which later blocks of this kind find earlier ones of the same name.
    """

    word: str
    title: str
    about: str
    fields: tuple[Field, ...]
    example: str
    many: bool = False
    needs_revision: bool = False
    declare: Callable[[Values, Session], Any] | None = None
    calculate: Callable[[Block, Session], Outcome] | None = None
    show: Callable[[Block, Outcome, View], list[Piece]] | None = None
    name_key: str = ""
    hazard: str = ""
    more: str = ""
