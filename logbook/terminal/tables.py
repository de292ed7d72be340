"""Tables with aligned columns; what is too wide for the terminal is set as one block a row."""

from __future__ import annotations

from collections.abc import Sequence

from logbook.pieces import Table
from logbook.terminal.lines import clean, line_text, padded, width_of, wrapped

_GAP = "  "
# A column narrower than this breaks words in the middle of what they mean.
_NARROWEST = 12


def table_lines(table: Table, width: int, rule: str) -> list[str]:
    """The table's lines, its caption first."""
    head = [line_text(cell) for cell in table.head]
    rows = [[line_text(cell) for cell in row] for row in table.rows]
    count = max(map(len, [head, *rows]))
    filled = [row + [""] * (count - len(row)) for row in [head, *rows]]
    caption = wrapped(clean(table.caption), width) if table.caption else []
    widths = _fitted([max(width_of(row[i]) for row in filled) for i in range(count)], table.numeric, width)
    if widths is None:
        return [*caption, *_blocks(filled[0], filled[1:], width)]
    lines = [*caption]
    if any(head):
        lines += _row(filled[0], widths, table.numeric)
        lines.append(_GAP.join(rule * each for each in widths))
    for row in filled[1:]:
        lines += _row(row, widths, table.numeric)
    return lines


def _fitted(widths: list[int], numeric: frozenset[int], width: int) -> list[int] | None:
    """The columns' widths, the widest column of words narrowed until all fit; None where they cannot."""
    fitted = list(widths)
    excess = sum(fitted) + len(_GAP) * (len(fitted) - 1) - width
    while excess > 0:
        wordy = [i for i in range(len(fitted)) if i not in numeric and fitted[i] > _NARROWEST]
        if not wordy:
            return None
        widest = max(wordy, key=lambda i: fitted[i])
        cut = min(excess, fitted[widest] - _NARROWEST, max(1, fitted[widest] // 4))
        fitted[widest] -= cut
        excess -= cut
    return fitted


def _row(cells: Sequence[str], widths: list[int], numeric: frozenset[int]) -> list[str]:
    columns = [
        [cell] if width_of(cell) <= each else wrapped(cell, each) for cell, each in zip(cells, widths, strict=True)
    ]
    lines = []
    for depth in range(max(map(len, columns), default=0)):
        parts = [
            padded(column[depth] if depth < len(column) else "", widths[i], i in numeric)
            for i, column in enumerate(columns)
        ]
        lines.append(_GAP.join(parts).rstrip())
    return lines


def _blocks(head: Sequence[str], rows: Sequence[Sequence[str]], width: int) -> list[str]:
    names = max(map(width_of, head), default=0)
    lines: list[str] = []
    for row in rows:
        lines += wrapped(row[0], width)
        for name, cell in zip(head[1:], row[1:], strict=True):
            if cell:
                lines += wrapped(cell, width, f"  {padded(name, names)}  ", " " * (names + 4))
    return lines
