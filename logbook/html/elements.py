"""Elements with their text escaped: no other module of the engine puts a tag together."""

from __future__ import annotations

import re
from html import escape

# What neither HTML nor XML may carry, lone surrogates among it: it would end the page or the writing of it.
_FORBIDDEN = re.compile(r"[^\t\n\r\x20-\x7e\xa0-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")


def text(words: str) -> str:
    """Words as text between tags."""
    return escape(_FORBIDDEN.sub("\ufffd", words), quote=False)


def attribute(words: str) -> str:
    """Words as the value of an attribute."""
    return escape(_FORBIDDEN.sub("\ufffd", words), quote=True)


def element(name: str, content: str, classes: str = "", **attributes: str | None) -> str:
    """An element around content that is HTML already; an attribute that is None is left out."""
    return f"{opening(name, classes, **attributes)}{content}</{name}>"


def opening(name: str, classes: str = "", **attributes: str | None) -> str:
    """The opening tag alone; `aria_label` is written `aria-label`, `for_` is written `for`."""
    given = {"class": classes or None, **attributes}
    written = (
        f' {key.rstrip("_").replace("_", "-")}="{attribute(value)}"'
        for key, value in given.items()
        if value is not None
    )
    return f"<{name}{''.join(written)}>"


def class_word(words: str) -> str:
    """`not comparable` as `lb-not-comparable`."""
    return "lb-" + (re.sub(r"[^a-z0-9]+", "-", words.lower()).strip("-") or "unnamed")
