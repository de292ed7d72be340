"""Pieces that are more than a line, as lines of text."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from logbook.pieces import Box, Branch, Cards, Diagram, Picture, Tree, Written
from logbook.terminal.lines import clean, line_text, padded, width_of, wrapped
from logbook.terminal.tables import table_lines

# Columns that a card's words should have beside its title and figure.
_LEAST_ROOM = 20


@dataclass(frozen=True, slots=True)
class Signs:
    """What lines are drawn with."""

    rule: str
    arrow: str
    bullet: str


def picture_lines(picture: Picture, width: int, signs: Signs) -> list[str]:
    """What the picture shows, in words, and its numbers."""
    lines = [clean(picture.title), *wrapped(clean(picture.alt), width)]
    return [*lines, *table_lines(picture.numbers, width, signs.rule)] if picture.numbers is not None else lines


def diagram_lines(diagram: Diagram, width: int, signs: Signs) -> list[str]:
    """The stages in order, one beneath the other."""
    names = max((width_of(clean(box.name)) for box in diagram.boxes), default=0)
    kinds = max((len(box.symbol) for box in diagram.boxes), default=0)
    lines = [clean(diagram.title)]
    if diagram.enters:
        lines.append(f"  {signs.arrow} {clean(diagram.enters)}")
    lines += [_box(box, names, kinds) for box in diagram.boxes]
    if diagram.leaves:
        lines.append(f"  {signs.arrow} {clean(diagram.leaves)}")
    return lines


def _box(box: Box, names: int, kinds: int) -> str:
    facts = ", ".join([*box.lines, *([f"[{box.changed}]"] if box.changed else [])])
    return clean(f"    {padded(clean(box.name), names)}  {padded(box.symbol, kinds)}  {facts}").rstrip()


def tree_lines(tree: Tree, width: int, signs: Signs) -> list[str]:
    """The tree, each node on a line; only what branches off the main line is set in."""
    return [line for root in tree.roots for line in _branch(root, 0, signs)]


def _branch(start: Branch, depth: int, signs: Signs) -> Iterator[str]:
    here: Branch | None = start
    while here is not None:
        side = " (side branch)" if here.side else ""
        yield f"{'    ' * depth}{signs.bullet} {line_text(here.line)}{side}"
        onward = next((child for child in reversed(here.children) if here.side or not child.side), None)
        for child in here.children:
            if child is not onward:
                yield from _branch(child, depth + 1, signs)
        here = onward


def cards_lines(cards: Cards, width: int, signs: Signs) -> list[str]:
    """A line for each card; where that leaves too little room for its words, its title stands above them."""
    titles = max((width_of(line_text(card.title)) for card in cards.cards), default=0)
    figures = max((width_of(clean(card.figure)) for card in cards.cards), default=0)
    lines = []
    for card in cards.cards:
        words = [line_text(card.verdict) if card.verdict is not None else "", line_text(card.line)]
        figure = f"{padded(clean(card.figure), figures, right=True)}  "
        start = f"{padded(line_text(card.title), titles)}  {figure}"
        if width - width_of(start) < _LEAST_ROOM:
            lines += wrapped(line_text(card.title), width)
            start = f"    {figure}"
        lines += wrapped(", ".join(filter(None, words)), width, start, " " * width_of(start))
    return lines


def written_lines(written: Written, width: int, signs: Signs) -> list[str]:
    """The block with the file's line numbers, then its problems."""
    rows = written.text.removesuffix("\n").split("\n")
    digits = len(str(written.first_line + len(rows)))
    lines = [f"{number:>{digits}} | {clean(row)}" for number, row in enumerate(rows, written.first_line)]
    return [line.rstrip() for line in lines] + [clean(problem) for problem in written.problems]
