"""Deltas, budgets and agreement as tables."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from math import isnan

from logbook.compare.verdicts import GONE, NEW, SAME
from logbook.findings import Agreement, Delta
from logbook.pieces import Folded, Items, Line, Muted, Piece, Span, Table, Text, Verdict
from logbook.quantities import known_quantity
from logbook.quantity_display import show_delta, show_frequency, show_value
from logbook.showing.words import change, difference_unit, percent, plain, reason, result_words, revision_link


def delta_words(d: Delta, *, chains: bool = False) -> str:
    """What a delta is of; a level of noise with the bandwidth that its two numbers are in."""
    words = result_words(d.quantity, d.at_hz, d.name, d.chain if chains else "")
    known = known_quantity(d.quantity)
    if known is None or not known.noise or known.dimension != "level":
        return words
    rbw = d.after_result.conditions.rbw_hz if d.after_result is not None else None
    if d.after_result is None:
        return f"{words}, in the chain's bandwidth"
    return words if rbw is None else f"{words}, in {show_frequency(rbw)}"


def deltas_table(deltas: Iterable[Delta], caption: str, *, chains: bool = False) -> Table:
    """Before, after, change and verdict of each delta."""
    rows: list[tuple[Line, ...]] = []
    for d in deltas:
        rows.append(
            (
                delta_words(d, chains=chains),
                plain(d.before, d.unit),
                plain(d.after, d.unit),
                change(d),
                (Verdict(d.verdict), " ", reason(d.why)) if d.why else Verdict(d.verdict),
            )
        )
    head = ("quantity", "before", "after", "change", "verdict")
    return Table(head, tuple(rows), caption, frozenset({1, 2, 3}))


def deltas_pieces(deltas: Iterable[Delta], caption: str, *, chains: bool = False) -> list[Piece]:
    """The deltas that have two sides as a table; what was read on one side only is named beneath."""
    found = list(deltas)
    sided = [d for d in found if d.verdict not in (NEW, GONE)]
    pieces: list[Piece] = [deltas_table(sided, caption, chains=chains)] if sided else []
    return [*pieces, *one_sided(found, chains=chains)]


def moved_pieces(deltas: Iterable[Delta], caption: str, *, chains: bool = False) -> list[Piece]:
    """As `deltas_pieces`, but what stayed the same is only named."""
    found = list(deltas)
    pieces = deltas_pieces([d for d in found if d.verdict != SAME], caption, chains=chains)
    same = [result_words(d.quantity, d.at_hz, d.name, d.chain if chains else "") for d in found if d.verdict == SAME]
    return [*pieces, *_named("The same within doubt", same)] if same else pieces


def one_sided(deltas: Iterable[Delta], *, chains: bool = False) -> list[Piece]:
    """What was read for the first time, and what was not read again, by name."""
    found, pieces = list(deltas), list[Piece]()
    for verdict, words in ((NEW, "Read for the first time"), (GONE, "Not read again yet")):
        names = [
            result_words(d.quantity, d.at_hz, d.name, d.chain if chains else "") for d in found if d.verdict == verdict
        ]
        if names:
            pieces += _named(words, names)
    return pieces


# More names than this stand back until asked for.
_FEW = 6


def _named(words: str, names: list[str]) -> list[Piece]:
    if len(names) <= _FEW:
        return [Text((f"{words}: ", Muted("; ".join(names)), "."))]
    return [Folded(f"{words}: {len(names)} results", (Items(tuple(names)),))]


def budget_pieces(delta: Delta, k: float) -> list[Piece]:
    """How the doubt of a delta comes about, source by source."""
    if not delta.budget:
        return []
    rows: list[tuple[Line, ...]] = []
    for row in delta.budget:
        said = "common to both: cancels" if row.cancelled else f"{row.contribution:.3g}"
        rows.append((row.source.words, f"{row.u:.3g}", f"{row.sensitivity:+.3g}", said))
    unit = difference_unit(delta.unit)
    head = ("source", f"u, {unit}", "sensitivity", f"contribution, {unit}")
    table = Table(head, tuple(rows), "Where the doubt of the change comes from", frozenset({1, 2, 3}))
    if delta.u is None:
        total = "What was stated cancels, and what is fresh in each reading was not stated."
    else:
        total = (
            f"Together u = {show_value(delta.u, unit)}; with k = {k:g}, ± {show_value(k * delta.u, unit)}. A source's "
        )
        total += "u is what it makes of either side, its sensitivity what is left of that in the change."
    return [table, Text(total)]


def agreement_table(found: Sequence[Agreement], caption: str = "Measured against predicted") -> Table:
    """Each reading beside the prediction for its own conditions."""
    rows: list[tuple[Line, ...]] = []
    for a in found:
        en = "" if isnan(a.en) else f"{a.en:.2f}"
        rows.append(
            (
                result_words(a.result.quantity, a.result.at_hz, a.result.name),
                plain(a.measured, a.unit, a.u_measured),
                plain(a.predicted, a.unit, a.u_predicted),
                show_delta(a.measured - a.predicted, difference_unit(a.unit)),
                en,
                (Verdict(a.verdict), " ", reason(a.why)) if a.why else Verdict(a.verdict),
            )
        )
    head = ("quantity", "measured", "predicted", "difference", "E_n", "verdict")
    return Table(head, tuple(rows), caption, frozenset({1, 2, 3, 4}))


def shares_pieces(found: Agreement) -> list[Piece]:
    """Where a difference between measurement and prediction could come from."""
    if not found.shares:
        return []
    weighty = [s for s in found.shares if s.share >= _WEIGHTY] or list(found.shares[:1])
    rows: list[tuple[Line, ...]] = [(s.source.words, percent(s.share), show_delta(s.shift, s.unit)) for s in weighty]
    if found.u_measured and found.u_predicted:
        left = (found.measured - found.predicted) / (1 + (found.u_predicted / found.u_measured) ** 2)
        rows.append(("the reading itself", "", show_delta(left, difference_unit(found.unit))))
    what = result_words(found.result.quantity, found.result.at_hz, found.result.name)
    caption = f"Where the difference in {what} could come from, all together"
    head = ("stage and parameter", "share of the prediction's variance", "most likely shift")
    pieces: list[Piece] = [Table(head, tuple(rows), caption, frozenset({1, 2}))]
    rest = [s.source.words for s in found.shares if s not in weighty]
    if rest:
        pieces.append(Text(Muted(f"Under {percent(_WEIGHTY)} each: {', '.join(rest)}.")))
    return pieces


# Shares below this are named, not listed.
_WEIGHTY = 0.005


def revision_change(label: str, parent: str | None) -> tuple[Span, ...]:
    """A line that links a revision and the one it comes from."""
    if parent is None:
        return ("revision ", revision_link(label))
    return ("revision ", revision_link(label), ", from ", revision_link(parent))


def folded(summary: str, pieces: Sequence[Piece]) -> list[Piece]:
    """Pieces folded away beneath a summary; nothing for none."""
    return [Folded(summary, tuple(pieces))] if pieces else []
