"""`todo`: what is left to do, and what has been done."""

from __future__ import annotations

from logbook.fields import Field, text
from logbook.findings import Todo, TodoWords
from logbook.kind import Kind, Outcome, Session, View
from logbook.model import Block, Values
from logbook.pieces import Items, Line, Link, Muted, Piece, Strong

FIELDS = (
    Field("id", text()),
    Field("what", text()),
    Field("done", text()),
)

EXAMPLE = """\
- {id: vga-supply, what: find out why the supply of the vga rises with temperature}
- {id: input-relay, what: replace the input relay}
"""


def declare(values: Values, session: Session) -> TodoWords | None:
    """One item opened or closed."""
    opens, closes = "id" in values and "what" in values, "done" in values
    if opens == closes or (closes and ("id" in values or "what" in values)):
        message = "An item is either opened with 'id' and 'what', or closed with 'done'."
        session.fault(values.start, "todo", message, "Such as {id: relay, what: replace the relay} or {done: relay}.")
        return None
    if closes:
        return TodoWords(closes=((values["done"], values.place("done")),))
    return TodoWords(opens=((values["id"], values["what"], values.place("id")),))


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """What this block opens and closes, with what has become of it."""
    items = {todo.id: todo for todo in view.findings.todo}
    lines: list[Line] = []
    for words in outcome.data or ():
        if isinstance(words, TodoWords):
            lines += [_opened(what, items.get(name), view) for name, what, _ in words.opens]
            lines += [_closed(name, items.get(name)) for name, _ in words.closes]
    return [Items(tuple(lines))] if lines else []


def _opened(what: str, todo: Todo | None, view: View) -> Line:
    if todo is None or todo.closed is None:
        return (Strong("open: "), what)
    if todo.closed == view.entry.path:
        return (Strong("done: "), what)
    return (Strong("done since: "), what, " ", Link(f"in {_stem(todo.closed)}", f"entry:{todo.closed}"))


def _stem(path: str) -> str:
    return path.rpartition("/")[2].removesuffix(".md")


def _closed(name: str, todo: Todo | None) -> Line:
    if todo is None:
        return (Strong("done: "), name)
    return (Strong("done: "), todo.what, " ", Muted("opened in "), Link(_stem(todo.opened), f"entry:{todo.opened}"))


KIND = Kind(
    word="todo",
    title="Open items",
    about="What is left to do: an item is opened with an id, and closed by `done: vga-supply` in a later entry.",
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    declare=declare,
    show=show,
)
