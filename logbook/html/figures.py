"""Pictures, block diagrams and cards."""

from __future__ import annotations

from logbook.html.context import Context
from logbook.html.elements import class_word, element, text
from logbook.html.lines import line_html, verdict_html
from logbook.html.symbols import symbol_html
from logbook.html.tables import table_html
from logbook.pieces import Box, Card, Cards, Diagram, Picture


def picture_html(picture: Picture, context: Context) -> str:
    """A drawing with its text alternative, and its numbers folded beneath it."""
    drawing = _described(context.picture(picture.drawing), picture)
    numbers = ""
    if picture.numbers is not None:
        summary = element("summary", text(f"{picture.title} as a table"))
        numbers = element("details", summary + table_html(picture.numbers, context, picture.title), "lb-fold")
    content = element("figcaption", text(picture.title)) + element("div", drawing, "lb-drawing") + numbers
    return element("figure", content, "lb-figure lb-picture")


def _described(svg: str, picture: Picture) -> str:
    # No ids and no aria-labelledby: the same drawing may stand twice on a page, and title and desc name it alone.
    start, _, rest = svg.partition(">")
    words = element("title", text(picture.title)) + element("desc", text(picture.alt))
    return f'{start} role="img">{words}{rest}'


def diagram_html(diagram: Diagram, context: Context) -> str:
    """A block diagram: a list of stages in order, which wraps where the page is narrow."""
    boxes = "\n".join(_box(box) for box in diagram.boxes)
    enters = _port("enters", diagram.enters)
    leaves = _port("leaves", diagram.leaves)
    chain = element("ol", f"{enters}\n{boxes}\n{leaves}", "lb-chain")
    return element("figure", element("figcaption", text(diagram.title)) + chain, "lb-figure lb-diagram")


def _port(way: str, words: str) -> str:
    if not words:
        return ""
    # A number stays on one line with its unit.
    fact = element("span", text(words.replace(" ", "\u00a0").replace(",\u00a0", ", ")), "lb-fact")
    wired = element("span", symbol_html(way), "lb-wire")
    return element("li", wired + element("span", way, "lb-way") + " " + fact, "lb-port")


def _box(box: Box) -> str:
    facts = "".join(" " + element("span", text(line), "lb-fact") for line in box.lines)
    changed = " " + element("span", text(box.changed), "lb-mark") if box.changed else ""
    wired = element("span", symbol_html(box.symbol), "lb-wire")
    name = element("span", text(box.name), "lb-name")
    classes = "lb-stage lb-changed-stage" if box.changed else "lb-stage"
    return element("li", wired + name + changed + facts, f"{classes} {class_word(box.symbol)}")


def cards_html(cards: Cards, context: Context) -> str:
    """Figures at a glance, side by side where there is room."""
    return element("ul", "\n".join(_card(card, context) for card in cards.cards), "lb-cards")


def _card(card: Card, context: Context) -> str:
    parts = [
        element("p", line_html(card.title, context.url), "lb-card-title"),
        element("p", text(card.figure), "lb-card-figure"),
    ]
    if card.verdict is not None:
        parts.append(element("p", verdict_html(card.verdict), "lb-card-verdict"))
    if card.line:
        parts.append(element("p", line_html(card.line, context.url), "lb-card-line"))
    return element("li", "".join(parts), "lb-card")
