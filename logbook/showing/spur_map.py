"""A plan for a tuning range as pieces: the choices in their rank, and a map of what falls where."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from logbook.physics.mixing import Band
from logbook.pieces import Axis, Chart, Folded, Line, Mark, Muted, Note, Picture, Piece, Role, Series, Strong, Table
from logbook.quantity_display import show_frequency
from logbook.showing.words import percent
from logbook.spurs.planning import Asked, Choice, Crossing
from logbook.spurs.setting import SIGNAL

# Of a busy map the lowest orders are named; of a long table the rest stands folded beneath.
_MARKS = 4
_ROWS = 20
_MORE = 150
# A stretch wider than this part of the range is drawn as a line and not as a point.
_WIDE = 1 / 150


@dataclass(frozen=True, slots=True)
class Plan:
    """What was asked, the choices in their rank, what is heard whichever is taken, and the key of the one built."""

    asked: Asked
    choices: tuple[Choice, ...]
    common: tuple[Crossing, ...] = ()
    built: str = ""


def plan_pieces(plan: Plan) -> list[Piece]:
    """The ranking, then the map of the best choice, then those of the others."""
    usable = [each for each in plan.choices if not each.why]
    pieces: list[Piece] = [_ranking(plan)]
    if not usable:
        return [*pieces, Note("No choice can be used: each IF lies inside the tuning range.", "caution")]
    if len(usable) > 1:
        pieces.append(Note((Strong(f"Fewest low-order products: {usable[0].name}. "), _why_best(usable))))
    pieces += _map(usable[0], plan)
    for each in usable[1:]:
        pieces.append(Folded(f"IF {each.name}: {_count(each)}", tuple(_map(each, plan))))
    return [*pieces, *_listed(plan.common, "On the signal frequency, whichever is taken")]


def _why_best(usable: Sequence[Choice]) -> str:
    best, second = usable[0], usable[1]
    most = max([1, *(c.order for each in (best, second) for c in each.crossings)])
    for order, (one, other) in enumerate(zip(best.counts(most), second.counts(most), strict=True), start=1):
        if one != other:
            return f"At order {order} it has {one}; the next best, {second.name}, has {other}."
    return f"It has as many of each order as {second.name}, over a smaller part of the range."


def _count(choice: Choice) -> str:
    count = len(choice.crossings)
    return "no product" if not count else "one product" if count == 1 else f"{count} products"


def _ranking(plan: Plan) -> Table:
    low, high = plan.asked.tune
    rows: list[tuple[Line, ...]] = []
    for each in plan.choices:
        lowest = str(each.crossings[0].order) if each.crossings else ""
        told = [_by_order(each), lowest, percent(each.affected)]
        if each.why:
            told = [f"not usable: {each.why}", "", ""]
        name: Line = (each.name, " ", Muted("as it is now")) if each.key == plan.built else each.name
        rows.append((name, _band(each.lo), *told, _band(each.image), _band(each.half_if)))
    head = ("IF", "oscillator", "products", "lowest order", "of the range", "image", "half-IF")
    caption = f"Choices for {_band((low, high))}, products up to order {plan.asked.order}, fewest of low order first"
    return Table(head, tuple(rows), caption, frozenset({3, 4}))


def _by_order(choice: Choice) -> str:
    """`5: 1 of order 3, 4 of order 6`."""
    if not choice.crossings:
        return "none"
    orders = sorted({each.order for each in choice.crossings})
    counts = choice.counts(max(orders))
    listed = ", ".join(f"{counts[order - 1]} of order {order}" for order in orders[:3])
    return f"{len(choice.crossings)}: {listed}{' ...' if len(orders) > 3 else ''}"


def _band(band: Band) -> str:
    low, high = (show_frequency(round(each, 1)) for each in band)
    return low if low == high else f"{low} to {high}"


def _map(choice: Choice, plan: Plan) -> list[Piece]:
    if not choice.crossings:
        return [Note(f"IF {choice.name}: no product up to order {plan.asked.order} falls into it.", "good")]
    caption = f"What falls where with IF {choice.name}"
    title = f"Products over the tuning range, IF {choice.name}"
    shown = _table(choice.crossings[:_ROWS], caption)
    picture = Picture(title, _chart(choice, plan), _alt(choice, plan), shown)
    return [picture, *_rest(choice.crossings, caption)]


def _listed(found: Sequence[Crossing], caption: str) -> list[Piece]:
    return [_table(found[:_ROWS], caption), *_rest(found, caption)] if found else []


def _rest(found: Sequence[Crossing], caption: str) -> list[Piece]:
    """What the table above leaves out, folded; of very many those of the lowest order."""
    rest, left = found[_ROWS:_MORE], len(found) - _ROWS
    if not rest:
        return []
    said = f"{left} more" if left == len(rest) else f"{left} more; these {len(rest)} are of the lowest order"
    return [Folded(said, (_table(rest, f"{caption}, continued"),))]


def _alt(choice: Choice, plan: Plan) -> str:
    first = choice.crossings[0]
    where = f"the first is {first.words}, of order {first.order}, at {_band((first.low_hz, first.high_hz))}"
    count = _count(choice)
    return f"{count[:1].upper()}{count[1:]} from {_band(plan.asked.tune)}; {where}."


def _table(found: Sequence[Crossing], caption: str) -> Table:
    columns: list[tuple[str, list[Line]]] = [
        ("tuned to", [_band((each.low_hz, each.high_hz)) for each in found]),
        ("product", [each.words for each in found]),
        ("order", [str(each.order) for each in found]),
        ("falls onto", ["the signal frequency" if each.spot == SIGNAL else "the IF" for each in found]),
        ("what it is", [each.response for each in found]),
    ]
    told = [(head, cells) for head, cells in columns if any(cells)]
    rows = tuple(zip(*(cells for _, cells in told), strict=True))
    return Table(tuple(head for head, _ in told), rows, caption, frozenset({2}))


def _chart(choice: Choice, plan: Plan) -> Chart:
    low, high = plan.asked.tune
    wide = _WIDE * (high - low)
    # The range itself, from end to end at order zero, so that the map shows where nothing is too.
    series = [Series("", [low / 1e6, high / 1e6], [0.0, 0.0], "before")]
    sorts: tuple[tuple[str, str, Role], ...] = (("IF", "into the IF", "now"), (SIGNAL, "onto the signal", "other"))
    for spot, words, role in sorts:
        there = [each for each in choice.crossings if each.spot == spot]
        narrow = [each for each in there if each.high_hz - each.low_hz <= wide]
        if narrow:
            x, y = [each.middle_hz / 1e6 for each in narrow], [float(each.order) for each in narrow]
            series.append(Series(words, x, y, role, line=False, marker=True))
        stretches = [each for each in there if each not in narrow]
        if stretches:
            # nan lifts the pen between two stretches.
            x = [hz / 1e6 for each in stretches for hz in (each.low_hz, each.high_hz, float("nan"))]
            y = [order for each in stretches for order in (float(each.order), float(each.order), float("nan"))]
            series.append(Series(f"{words}, over a stretch", x, y, role))
    return Chart(Axis("tuned to, MHz"), Axis("order of the product"), tuple(series), marks=_marks(choice, wide))


def _marks(choice: Choice, near_hz: float) -> tuple[Mark, ...]:
    """The lowest orders by name; products that stand at one place of the map share a mark."""
    groups: list[list[Crossing]] = []
    for each in choice.crossings:
        same = [g for g in groups if g[0].order == each.order and abs(g[0].middle_hz - each.middle_hz) <= near_hz]
        if same:
            same[0].append(each)
        elif len(groups) < _MARKS:
            groups.append([each])
    words = [g[0].words + (f" and {len(g) - 1} more" if len(g) > 1 else "") for g in groups]
    return tuple(
        Mark(group[0].middle_hz / 1e6, float(group[0].order), said) for group, said in zip(groups, words, strict=True)
    )
