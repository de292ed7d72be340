"""What is shown, as data. `html` and `terminal` turn pieces into text; nothing else writes tags."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Literal

# --- inside a line -------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class Verdict:
    """A word of judgement; it is always shown as a word, its look only supports it."""

    word: str
    detail: str = ""


@dataclass(frozen=True, slots=True)
class Link:
    """A way to another page: `to` is `entry:PATH`, `revision:LABEL` or `page:NAME`."""

    text: str
    to: str
    anchor: str = ""


@dataclass(frozen=True, slots=True)
class Strong:
    """Words that carry the sentence."""

    text: str


@dataclass(frozen=True, slots=True)
class Muted:
    """Words that explain, in a quieter voice."""

    text: str


@dataclass(frozen=True, slots=True)
class Code:
    """Text as it was written in a block or is typed in a terminal."""

    text: str


Span = str | Verdict | Link | Strong | Muted | Code
Line = Span | tuple[Span, ...]

# --- charts --------------------------------------------------------------------------------------

Role = Literal["signal", "noise", "ceiling", "now", "before", "other", "difference", "fit", "limit", "share"]


@dataclass(frozen=True, slots=True)
class Axis:
    """One axis: `ticks` names the positions 0, 1, 2 ... of a category axis."""

    label: str
    scale: Literal["linear", "log", "category"] = "linear"
    ticks: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Series:
    """One course; nan breaks the line. `error` is the half-length of error bars, in y units.

    `marker` draws each point; roles differ in dash and marker too, never in colour alone.
    """

    name: str
    x: Sequence[float]
    y: Sequence[float]
    role: Role = "now"
    line: bool = True
    marker: bool = False
    error: Sequence[float] = ()


@dataclass(frozen=True, slots=True)
class Limit:
    """A limit to meet: the forbidden side of `low` or `high` is hatched lightly."""

    text: str
    low: float | None = None
    high: float | None = None


@dataclass(frozen=True, slots=True)
class Mark:
    """A point worth a word."""

    x: float
    y: float
    text: str


@dataclass(frozen=True, slots=True)
class Chart:
    """A chart of courses; `below` is a second, lower chart on the same x axis (a difference)."""

    x: Axis
    y: Axis
    series: tuple[Series, ...]
    limits: tuple[Limit, ...] = ()
    marks: tuple[Mark, ...] = ()
    below: Chart | None = None


@dataclass(frozen=True, slots=True)
class Bars:
    """Horizontal bars, one a label and group, for shares: `values[group][label]` from 0 to 1."""

    labels: tuple[str, ...]
    groups: tuple[str, ...]
    values: tuple[tuple[float, ...], ...]


# --- pieces --------------------------------------------------------------------------------------

Tone = Literal["plain", "good", "caution", "problem"]


@dataclass(frozen=True, slots=True)
class Heading:
    """A heading within a page; `id` makes it linkable."""

    level: int
    text: str
    id: str = ""


@dataclass(frozen=True, slots=True)
class Text:
    """A paragraph."""

    line: Line


@dataclass(frozen=True, slots=True)
class Note:
    """A sentence set apart."""

    line: Line
    tone: Tone = "plain"


@dataclass(frozen=True, slots=True)
class Items:
    """A list; `ordered` numbers it."""

    lines: tuple[Line, ...]
    ordered: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """A table whose first column names the row. `numeric` are the columns set as figures."""

    head: tuple[Line, ...]
    rows: tuple[tuple[Line, ...], ...]
    caption: str = ""
    numeric: frozenset[int] = frozenset()
    ids: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Picture:
    """A drawing with its text alternative and its numbers as a table."""

    title: str
    drawing: Chart | Bars
    alt: str
    numbers: Table | None = None


@dataclass(frozen=True, slots=True)
class Box:
    """A stage in a block diagram: `symbol` is amplifier, filter, pad, mixer, detector, attenuator or stage."""

    name: str
    symbol: str
    lines: tuple[str, ...] = ()
    changed: str = ""


@dataclass(frozen=True, slots=True)
class Diagram:
    """A block diagram: boxes in order, from what enters to what leaves."""

    title: str
    enters: str
    boxes: tuple[Box, ...]
    leaves: str = ""


@dataclass(frozen=True, slots=True)
class Branch:
    """A node of a tree with what grows from it; `side` marks a trial or a plan, `state` says which."""

    line: Line
    children: tuple[Branch, ...] = ()
    side: bool = False
    state: str = ""


@dataclass(frozen=True, slots=True)
class Tree:
    """A tree, such as the revisions of the hardware."""

    roots: tuple[Branch, ...]


@dataclass(frozen=True, slots=True)
class Card:
    """One figure at a glance: what, the number, the verdict, a line beneath."""

    title: Line
    figure: str
    verdict: Verdict | None = None
    line: Line = ""


@dataclass(frozen=True, slots=True)
class Cards:
    """Several figures at a glance."""

    cards: tuple[Card, ...]


@dataclass(frozen=True, slots=True)
class Written:
    """A block's own text, as written, with the problems found in it beneath."""

    text: str
    problems: tuple[str, ...]
    first_line: int = 1


@dataclass(frozen=True, slots=True)
class Folded:
    """Detail that stands back until asked for."""

    summary: str
    pieces: tuple[Piece, ...]


@dataclass(frozen=True, slots=True)
class Download:
    """A small file offered on the page."""

    text: str
    file: str
    content: str


Piece = Heading | Text | Note | Items | Table | Picture | Diagram | Tree | Cards | Written | Folded | Download


@dataclass(frozen=True, slots=True)
class Page:
    """A page that the logbook makes itself: its path in the site's sources, title, and pieces."""

    path: str
    title: str
    pieces: tuple[Piece, ...] = field(default=())
    search: str = ""
