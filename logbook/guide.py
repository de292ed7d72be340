"""The guide to every kind of block, drawn from the registry; `python -m logbook.guide README.md` renews it there."""

from __future__ import annotations

import sys
from pathlib import Path

from logbook.kind import Kind
from logbook.kinds import registry

BEGIN = "<!-- kinds: from here to the end mark this text is drawn from the registry -->"
END = "<!-- kinds: end -->"

# The order in which a newcomer meets them; kinds not named here follow in alphabetical order.
_ORDER = ("chain", "change", "bench", "reading", "target", "accept", "todo")


def kinds_guide() -> str:
    """Every kind with what it is for, its keys, and its example, as Markdown."""
    kinds = registry()
    words = [word for word in _ORDER if word in kinds] + sorted(set(kinds) - set(_ORDER))
    return "\n".join(_kind(kinds[word]) for word in words)


def _kind(kind: Kind) -> str:
    keys = ", ".join(f"**`{f.name}`**" if f.required else f"`{f.name}`" for f in kind.fields)
    lines = [f"### `{kind.word}`", "", kind.about]
    if kind.many:
        lines[-1] += " The block holds one mapping or a list of them."
    if kind.hazard:
        lines += ["", f"> {kind.hazard}"]
    lines += ["", f"Keys (required ones in bold): {keys}.", ""]
    lines += [f"```yaml {kind.word}", kind.example.rstrip("\n"), "```", ""]
    return "\n".join(lines)


def renew(text: str) -> str:
    """A document with its guide renewed between the marks. ValueError: the marks are not there."""
    if BEGIN not in text or END not in text:
        raise ValueError("the marks of the guide are not in this text")
    head, rest = text.split(BEGIN, 1)
    tail = rest.split(END, 1)[1]
    return f"{head}{BEGIN}\n\n{kinds_guide()}\n{END}{tail}"


if __name__ == "__main__":
    path = Path(sys.argv[1])
    path.write_text(renew(path.read_text(encoding="utf-8")), encoding="utf-8")
