"""Block after block, the results: each kind calculates its own; a kind without a calculation yields its fields."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from functools import cached_property

from logbook.book.history import BlockKey, History, Reader
from logbook.hardware import Chain
from logbook.kind import Earlier, Kind, Outcome, Session
from logbook.model import MEASURED, PREDICTED, Block, Entry, Result, Source, Values
from logbook.prediction import Prediction, Terms
from logbook.problems import Problems
from logbook.quantities import BETTER, Better, known_quantity
from logbook.quantity import Quantity
from logbook.revision import Revision


@dataclass
class Calculated:
    """The outcomes of all blocks, and their results in the order of the entries."""

    predict: Callable[[Chain, Terms], Prediction]
    outcomes: dict[BlockKey, Outcome] = field(default_factory=dict)
    of_blocks: list[Result] = field(default_factory=list)
    earlier: dict[tuple[str, str], list[Earlier]] = field(default_factory=dict)
    made: list[tuple[int, Revision]] = field(default_factory=list)

    @cached_property
    def results(self) -> list[Result]:
        """The results of the blocks, and ahead of them the totals of each revision where it is made."""
        found: list[Result] = []
        start = 0
        for count, revision in self.made:
            found += self.of_blocks[start:count]
            found += predicted_results(revision, self.predict)
            start = count
        return found + self.of_blocks[start:]


def calculate(
    history: History,
    kinds: Mapping[str, Kind],
    problems: Problems,
    reader: Reader,
    predict: Callable[[Chain, Terms], Prediction],
) -> Calculated:
    """Calculate every block of every entry, in their order; predicted totals stand where their revision is made."""
    done = Calculated(predict)
    for entry in history.entries:
        revision = history.of(entry)
        if revision is not None and revision.entry == entry.path:
            done.made.append((len(done.of_blocks), revision))
        for block in entry.blocks:
            kind = kinds.get(block.kind)
            if kind is None or (kind.needs_revision and revision is None):
                continue
            session = Session(
                entry=entry,
                block=block,
                revision=revision,
                chains=revision.chains if revision is not None else {},
                benches=history.benches[entry.path],
                problems=problems,
                read_file=reader(entry.path),
                predict=predict,
                earlier=done.earlier,
                lost_chains=_lost_chains(revision, history),
            )
            outcome = _outcome(block, kind, session, history)
            done.outcomes[(entry.path, block.number)] = outcome
            done.of_blocks += outcome.results
            _remember(done, entry, block, kind, session.label, outcome)
    return done


def _lost_chains(revision: Revision | None, history: History) -> tuple[str, ...]:
    if revision is None or not revision.broken:
        return ()
    return tuple(dict.fromkeys(name for each in history.ancestors(revision.label) for name in each.chains))


def _outcome(block: Block, kind: Kind, session: Session, history: History) -> Outcome:
    if kind.declare is not None:
        return Outcome(data=tuple(history.declared.get((block.entry, block.number), ())))
    if not block.items:
        return Outcome()
    if kind.calculate is not None:
        return kind.calculate(block, session)
    return Outcome(tuple(result for values in block.items for result in _fields(values, kind, session)))


def _fields(values: Values, kind: Kind, session: Session) -> list[Result]:
    """The fields of a kind that has no calculation of its own, each as a measured result."""
    chain = session.chain_name(values)
    if chain is None:
        return []
    found = []
    for each in kind.fields:
        value = values.get(each.name)
        if isinstance(value, Quantity) and (each.better or known_quantity(each.name)):
            found.append(_field_result(each.name, value, each.better, values, chain, kind, session))
    return found


def _field_result(
    name: str, value: Quantity, stated: str, values: Values, chain: str, kind: Kind, session: Session
) -> Result:

    known = known_quantity(name)
    better: Better = next((b for b in BETTER if b == stated), known.better if known else "neither")
    place = values.place(name)
    parts = {Source("fresh", f"{place.file}:{place.line}", name, "reading"): value.u} if value.u else None
    return Result(
        quantity=name,
        chain=chain,
        at_hz=values["at"].value if "at" in values else None,
        name=values.get("name", ""),
        revision=session.label,
        entry=session.entry.path,
        line=place.line,
        block=kind.word,
        basis=MEASURED,
        value=value.value,
        unit=value.unit,
        better=better,
        parts=parts,
        shown=value.value,
    )


def _remember(done: Calculated, entry: Entry, block: Block, kind: Kind, label: str, outcome: Outcome) -> None:
    for values in block.items:
        name = str(values.get(kind.name_key, "")) if kind.name_key else ""
        done.earlier.setdefault((kind.word, name), []).append(Earlier(label, entry, block, outcome))


def predicted_results(revision: Revision, predict: Callable[[Chain, Terms], Prediction]) -> list[Result]:
    """The totals of every chain of a revision as predicted results."""
    found = []
    for name, chain in revision.chains.items():
        made = revision.made.get(name)
        for quantity, total in predict(chain, Terms()).totals.items():
            known = known_quantity(quantity)
            found.append(
                Result(
                    quantity=quantity,
                    chain=name,
                    at_hz=None,
                    name="",
                    revision=revision.label,
                    entry=revision.entry,
                    line=made.line if made is not None else 1,
                    block="chain" if made is None or made.full else "change",
                    basis=PREDICTED,
                    value=total.value,
                    unit=total.unit,
                    better=known.better if known else "neither",
                    parts=total.parts,
                    words=total.words,
                )
            )
    return found
