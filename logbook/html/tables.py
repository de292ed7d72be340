"""Tables: a phone scrolls the table and not the page."""

from __future__ import annotations

from logbook.html.context import Context
from logbook.html.elements import element, text
from logbook.html.lines import line_html, line_words
from logbook.pieces import Line, Table


def table_html(table: Table, context: Context, label: str = "") -> str:
    """A table in a region that scrolls sideways and can be reached with the keyboard."""
    caption = element("caption", text(table.caption)) if table.caption else ""
    head = "".join(_cell(cell, column, table, context, "col") for column, cell in enumerate(table.head))
    head = element("thead", element("tr", head)) if table.head else ""
    body = element("tbody", "\n".join(_row(table, number, context) for number in range(len(table.rows))))
    grid = element("table", f"{caption}{head}\n{body}", "lb-grid")
    name = table.caption or label or "Table of " + ", ".join(line_words(cell) for cell in table.head if cell)
    return element("div", grid, "lb-scroll", tabindex="0", role="region", aria_label=name)


def _row(table: Table, number: int, context: Context) -> str:
    cells = enumerate(table.rows[number])
    made = "".join(_cell(cell, column, table, context, "row" if column == 0 else None) for column, cell in cells)
    row_id = table.ids[number] if number < len(table.ids) and table.ids[number] else None
    return element("tr", made, id=row_id)


def _cell(cell: Line, column: int, table: Table, context: Context, scope: str | None) -> str:
    classes = ""
    if column in table.numeric:
        # Words in a column of figures ("not known: ...") may be long and then have to wrap; figures never do.
        classes = "lb-number" if scope == "col" or _is_figure(line_words(cell)) else "lb-number lb-words"
    return element("td" if scope is None else "th", line_html(cell, context.url), classes, scope=scope)


def _is_figure(words: str) -> bool:
    return len(words) <= 24 or words.lstrip("+-±<>=≤≥ ")[:1].isdigit()
