"""The guide to every kind of block, drawn from the registry; `python -m logbook.guide README.md` renews it there."""

from __future__ import annotations

import sys
from pathlib import Path

from logbook.kind import Kind
from logbook.kinds import registry
from logbook.quantities import KNOWN
from logbook.units import DIMENSIONS

BEGIN = "<!-- kinds: from here to the end mark this text is drawn from the registry -->"
END = "<!-- kinds: end -->"

# The order in which a newcomer meets them; kinds not named here follow in alphabetical order.
_ORDER = ("chain", "change", "bench", "reading", "target", "accept", "todo")


def kinds_guide() -> str:
    """Every kind with what it is for, its keys, and its example, as Markdown."""
    kinds = registry()
    words = [word for word in _ORDER if word in kinds] + sorted(set(kinds) - set(_ORDER))
    return "\n".join([*(_kind(kinds[word]) for word in words), *_quantities()])


_OF_QUANTITIES = (
    "For `results` of a reading and `quantity` of a target. A level at which something is taken is carried in the "
    "name: `bandwidth_3db`, `shape_factor_60_3`. The smallest change that matters is in dB, or a part of the value; "
    "`matters` in `mkdocs.yml` sets another one. Any other name is fine with `{value: ..., better: ...}`."
)


def _quantities() -> list[str]:
    """The quantities known by name, with the unit, the better direction, and the smallest change that matters."""
    lines = ["### Quantities known by name", "", _OF_QUANTITIES, ""]
    lines += ["| name | unit | better | smallest change |", "|---|---|---|---|"]
    for known in KNOWN.values():
        dimension = DIMENSIONS[known.dimension]
        base = dimension.base or "1"
        least = f"{known.matters:g} dB" if base.startswith("dB") else f"{100 * known.matters:g} %"
        lines.append(f"| `{known.name}` | {base} | {known.better} | {least} |")
    return [*lines, ""]


def _kind(kind: Kind) -> str:
    keys = ", ".join(f"**`{f.name}`**" if f.required else f"`{f.name}`" for f in kind.fields)
    lines = [f"### `{kind.word}`", "", kind.about]
    if kind.many:
        lines[-1] += " The block holds one mapping or a list of them."
    if kind.hazard:
        lines += ["", f"> {kind.hazard}"]
    lines += ["", f"Keys (required ones in bold): {keys}.", ""]
    lines += [f"```yaml {kind.word}", kind.example.rstrip("\n"), "```", ""]
    if kind.more:
        lines += [kind.more.strip(), ""]
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
