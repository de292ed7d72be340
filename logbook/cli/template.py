"""What a new entry holds: front matter, a place to write, and blocks to take out of a comment."""

from __future__ import annotations

from logbook.kinds import registry

_WRITE_HERE = "What was the question today, what was done, what came out?"
_HOW = "Blocks to begin with: take one out of this comment and write your own numbers into it."
_OFFERED = ("chain", "change", "bench", "reading", "target", "todo")


def entry_text(
    title: str, day: str, revision: str | None = None, parent: str | None = None, state: str | None = None
) -> str:
    """An entry in which nothing is wrong and nothing is computed yet. Texts are written as YAML wants them."""
    front = [f"title: {title}", f"date: {day}"]
    front += [f"revision: {revision}"] if revision else []
    front += [f"from: {parent}"] if parent else []
    front += [f"state: {state}"] if state else []
    head = "\n".join(["---", *front, "---"])
    return f"{head}\n\n{_WRITE_HERE}\n\n<!--\n{_HOW}\n\n{_blocks()}\n-->\n"


def _blocks() -> str:
    """The examples of the registry, so that they cannot lag behind it."""
    kinds = registry()
    return "\n".join(f"```yaml {word}\n{kinds[word].example.rstrip()}\n```\n" for word in _OFFERED if word in kinds)
