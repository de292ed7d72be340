"""Trees: what goes on stands beneath in one column, and only what branches off is set in."""

from __future__ import annotations

from logbook.html.context import Context
from logbook.html.elements import class_word, element
from logbook.html.lines import line_html
from logbook.pieces import Branch, Tree


def tree_html(tree: Tree, context: Context) -> str:
    """A tree as nested lists. A hundred revisions in a row stay one column: the page does not run off to the right."""
    return "".join(_list(root, context, "lb-tree") for root in tree.roots)


def _list(start: Branch, context: Context, classes: str) -> str:
    items: list[str] = []
    here: Branch | None = start
    while here is not None:
        onward = main_child(here)
        off = "".join("\n" + _list(child, context, "lb-twig") for child in here.children if child is not onward)
        mark = " " + element("span", "side branch", "lb-mark") if here.side and not here.state else ""
        side = f"lb-side {class_word(here.state)}" if here.side else ""
        items.append(element("li", line_html(here.line, context.url) + mark + off, side))
        here = onward
    return element("ul", "\n".join(items), classes)


def main_child(branch: Branch) -> Branch | None:
    """The child that the line goes on with: the latest built one; on a side branch, the latest."""
    return next((child for child in reversed(branch.children) if branch.side or not child.side), None)
