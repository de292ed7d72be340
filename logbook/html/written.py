"""A block as it was written, with what is wrong in it."""

from __future__ import annotations

import re

from logbook.html.context import Context
from logbook.html.elements import element, text
from logbook.pieces import Written

_PLACE = re.compile(r":(\d+):\d+: ")


def written_html(written: Written, context: Context) -> str:
    """The block's text with the file's line numbers; the problems beneath, their lines marked."""
    wrong = {int(found.group(1)) for found in map(_PLACE.search, written.problems) if found}
    lines = written.text.removesuffix("\n").split("\n")
    numbered = "\n".join(_line(number, line, wrong) for number, line in enumerate(lines, written.first_line))
    source = element("pre", numbered, "lb-source", tabindex="0", role="region", aria_label="The block as written")
    return element("div", source + _problems(written.problems), "lb-written")


def _line(number: int, line: str, wrong: set[int]) -> str:
    # The number is an attribute that the stylesheet shows, so that copying takes the text alone.
    classes = "lb-line lb-wrong" if number in wrong else "lb-line"
    return element("span", text(line), classes, data_line=str(number))


def _problems(problems: tuple[str, ...]) -> str:
    if not problems:
        return ""
    count = "1 problem" if len(problems) == 1 else f"{len(problems)} problems"
    items = "\n".join(element("li", text(problem)) for problem in problems)
    return element("p", count, "lb-problems-head") + element("ul", items, "lb-problems")
