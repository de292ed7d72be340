"""`parts`: what a change costs."""

from __future__ import annotations

from logbook.compare.costs import cost_by_currency, prices_of_improvement
from logbook.fields import Field, quantity, text, whole
from logbook.findings import Part
from logbook.kind import Kind, Outcome, Session, View
from logbook.model import Block, Values
from logbook.pieces import Piece, Text
from logbook.showing.parts import improvements_table, parts_table, sum_words

FIELDS = (
    Field("item", text(), required=True, help="What was bought, such as 'item: six crystals'."),
    Field("quantity", whole(1, 1_000_000)),
    Field("price", quantity("price", not_negative=True), required=True, help="The price of one, such as 12.40 EUR."),
    Field("chain", text()),
    Field("note", text()),
)

EXAMPLE = """\
- {item: crystals 10.7 MHz, quantity: 6, price: 1.90 EUR}
- {item: ferrite cores, quantity: 2, price: 0.50 EUR}
- {item: postage, price: 4.20 USD}
"""


def declare(values: Values, session: Session) -> Part | None:
    """One item with its price."""
    if "chain" in values and session.chain_name(values) is None:
        return None
    price = values["price"]
    return Part(
        item=values["item"],
        count=values.get("quantity", 1),
        price=price.value,
        currency=price.unit,
        chain=values.get("chain", ""),
        revision=session.label,
        planned=session.revision is not None and not session.revision.built and session.revision.state == "planned",
        entry=session.entry.path,
        place=values.start,
    )


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The items with their sums, and what each decibel of measured improvement cost."""
    parts = [each for each in outcome.data or () if isinstance(each, Part)]
    if not parts:
        return []
    pieces: list[Piece] = [parts_table(parts), Text(f"In all {sum_words(cost_by_currency(parts))}.")]
    label = view.revision.label if view.revision is not None else ""
    if any(not part.planned for part in parts):
        prices = prices_of_improvement(view.findings, label)
        if prices:
            pieces.append(improvements_table(prices, f"What the improvement of revision {label} cost"))
    return pieces


KIND = Kind(
    word="parts",
    title="Parts",
    about=(
        "What was bought for the revision: cost by revision and in all, each currency by itself, and what each decibel "
        "of measured improvement cost. What stands in a planned entry counts as planned, not as spent."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    declare=declare,
    show=show,
)
