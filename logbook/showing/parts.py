"""Parts and costs as pieces."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from logbook.compare.costs import PriceOfImprovement
from logbook.findings import Part
from logbook.pieces import Line, Table
from logbook.quantity_display import show_value
from logbook.showing.words import change, result_words


def parts_table(parts: Sequence[Part], caption: str = "Parts") -> Table:
    """Every item with its price and cost."""
    rows: list[tuple[Line, ...]] = [
        (part.item, f"{part.count}", show_value(part.price, part.currency), show_value(part.cost, part.currency))
        for part in parts
    ]
    return Table(("item", "quantity", "price of one", "cost"), tuple(rows), caption, frozenset({1, 2, 3}))


def sum_words(costs: Mapping[str, float]) -> str:
    """`15.80 EUR and 4.20 USD`; currencies are never added up."""
    return " and ".join(show_value(cost, currency) for currency, cost in costs.items()) or "nothing"


def improvements_table(prices: Sequence[PriceOfImprovement], caption: str) -> Table:
    """What each decibel of measured improvement cost."""
    rows: list[tuple[Line, ...]] = [
        (
            result_words(price.delta.quantity, price.delta.at_hz, price.delta.name, price.delta.chain),
            change(price.delta),
            show_value(price.cost, price.currency),
            show_value(price.per_db, price.currency),
        )
        for price in prices
    ]
    head = ("improvement, beyond doubt", "change", "cost", "cost of each dB")
    return Table(head, tuple(rows), caption, frozenset({1, 2, 3}))
