"""`accept`: a known regression of this entry's revision, accepted with the reason."""

from __future__ import annotations

from logbook.fields import Field, quantity, text
from logbook.findings import Accept
from logbook.kind import Kind, Outcome, Session, View
from logbook.model import Block, Values
from logbook.pieces import Items, Line, Note, Piece, Strong
from logbook.quantity_display import show_frequency

FIELDS = (
    Field("chain", text()),
    Field("quantity", text(), required=True, help="The quantity that got worse, such as 'quantity: iip3'."),
    Field("name", text()),
    Field("at", quantity("frequency", positive=True)),
    Field("why", text(), required=True, help="The reason; the site shows it beside the regression."),
)

EXAMPLE = """\
quantity: iip3
at: 50.1 MHz
why: 2 dB less, and no signal on this band comes within 20 dB of it
"""


def declare(values: Values, session: Session) -> Accept | None:
    """The acceptance as written."""
    if "chain" in values and session.chain_name(values) is None:
        return None
    return Accept(
        quantity=values["quantity"],
        chain=values.get("chain"),
        at_hz=values["at"].value if "at" in values else None,
        why=values["why"],
        name=values.get("name"),
        entry=session.entry.path,
        revision=session.label,
        place=values.place("quantity"),
    )


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """What is accepted, and why."""
    lines: list[Line] = []
    for accept in outcome.data or ():
        if isinstance(accept, Accept):
            at = f" at {show_frequency(accept.at_hz)}" if accept.at_hz is not None else ""
            named = f" “{accept.name}”" if accept.name else ""
            words = f"{accept.quantity.replace('_', ' ')}{named}{at}"
            lines.append((Strong(words), f" got worse on revision {accept.revision} and is accepted: {accept.why}"))
    if len(lines) == 1:
        return [Note(lines[0])]
    return [Items(tuple(lines))] if lines else []


KIND = Kind(
    word="accept",
    title="Accepted regressions",
    about="A known regression of this revision is accepted, with the reason. One that accepts nothing is a problem.",
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    declare=declare,
    show=show,
)
