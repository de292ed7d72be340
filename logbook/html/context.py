"""What rendering needs to know of the page around it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from logbook.pieces import Bars, Chart

Url = Callable[[str, str], str | None]
Drawer = Callable[[Chart | Bars], str]


@dataclass(frozen=True, slots=True)
class Context:
    """`url(to, anchor)` finds a link's address, None where there is no such page; `picture` draws."""

    url: Url
    picture: Drawer
