"""The book: everything read, resolved, calculated and compared, ready to be shown."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from pathlib import Path

from logbook.book.calculating import Calculated, calculate
from logbook.book.checks import check_chains
from logbook.book.comparing import compare_all
from logbook.book.consequences import drop_consequences
from logbook.book.history import History, read_history
from logbook.book.reading import Read, ReadFile, read_file
from logbook.book.sources import SourceFile, file_reader
from logbook.compare.verdicts import Rules
from logbook.findings import Findings
from logbook.hardware import Chain
from logbook.kind import Outcome, View
from logbook.kinds import registry
from logbook.model import Block, Entry, Result
from logbook.prediction import Prediction, Predictor, Terms
from logbook.problems import Problem, Problems
from logbook.revision import Revision


@dataclass(frozen=True, slots=True)
class Settings:
    """What the user may set: the site's title, the coverage factor, smallest changes that matter by quantity."""

    title: str = "Logbook"
    coverage: float = 2.0
    matters: dict[str, float] = field(default_factory=dict)


@dataclass(slots=True)
class Book:
    """A logbook, computed."""

    settings: Settings
    files: dict[str, ReadFile]
    history: History
    calculated: Calculated
    findings: Findings
    problems: Problems
    predict: Callable[[Chain, Terms], Prediction]

    @property
    def entries(self) -> list[Entry]:
        """The entries by date and path."""
        return self.history.entries

    @property
    def revisions(self) -> dict[str, Revision]:
        """The revisions in the order in which they were made."""
        return self.history.revisions

    @property
    def results(self) -> list[Result]:
        """All results, in the order of the entries."""
        return self.calculated.results

    @property
    def rules(self) -> Rules:
        """What verdicts rest on."""
        return Rules(self.settings.coverage, self.settings.matters)

    @property
    def latest(self) -> Revision | None:
        """The revision that was built last."""
        return next((r for r in reversed(self.revisions.values()) if r.built), None)

    def outcome(self, block: Block) -> Outcome:
        """What a block came to."""
        return self.calculated.outcomes.get((block.entry, block.number), Outcome())

    def problems_of(self, block: Block) -> list[Problem]:
        """The problems that stand in a block."""
        return self.problems.within(block.entry, block.line, block.last_line)

    def view(self, entry: Entry, block: Block) -> View:
        """What a block's page may show beside its outcome."""
        return View(
            entry=entry,
            block=block,
            revision=self.history.of(entry),
            revisions=self.revisions,
            benches=self.history.benches[entry.path],
            findings=self.findings,
            rules=self.rules,
            predict=self.predict,
            earlier=self.calculated.earlier,
        )


def make_book(
    sources: Iterable[SourceFile], folder: Path | None, settings: Settings | None = None, read: Read = read_file
) -> Book:
    """Read, resolve, calculate and compare a whole logbook. Nothing in it raises: faults are in the book's problems."""
    settings = settings or Settings()
    problems = Problems()
    kinds = registry()
    files = {source.path: read(source, kinds, problems) for source in sources}
    entries = [file.entry for file in files.values() if file.entry is not None]
    predicted = Predictor()

    def reader(path: str) -> Callable[..., bytes | None]:
        return file_reader(folder, path, problems)

    history = read_history(entries, kinds, problems, reader, predicted)
    calculated = calculate(history, kinds, problems, reader, predicted)
    rules = Rules(settings.coverage, settings.matters)
    check_chains(history.revisions.values(), predicted, problems)
    findings = compare_all(history, calculated.of_blocks, predicted, rules, problems)
    drop_consequences(files.values(), problems)
    return Book(settings, files, history, calculated, findings, problems, predicted)
