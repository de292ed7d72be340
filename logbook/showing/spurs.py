"""Spurs as pieces: the candidates of each with what speaks against them, and the trial to make next."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from logbook.pieces import Folded, Line, Note, Piece, Strong, Table, Text, Verdict
from logbook.quantity_display import show_delta, show_frequency
from logbook.spurs.candidates import Candidate
from logbook.spurs.setting import SIGNAL, Setting, SpurSource
from logbook.spurs.trials import Trial

POSSIBLE, STRUCK = "possible", "struck out"

# So many rows of a table tell the story; the rest stands folded beneath.
_ROWS = 16
_NAMED = 4


@dataclass(frozen=True, slots=True)
class Spur:
    """A spur that was seen, and what became of the search for it."""

    name: str
    seen_hz: float
    tolerance_hz: float
    where: str
    order: int
    setting: Setting
    candidates: tuple[Candidate, ...]
    trial: Trial | None

    @property
    def words(self) -> str:
        """The spur by name, and where it was seen."""
        at = show_frequency(self.seen_hz)
        named = f"Spur “{self.name}” at {at}" if self.name else f"Spur at {at}"
        return named if self.where == SIGNAL else f"{named} behind {self.where}"


def spur_pieces(spur: Spur) -> list[Piece]:
    """What the spur may be, in a table, and beneath it what to try next."""
    left = [each for each in spur.candidates if not each.struck]
    pieces: list[Piece] = [Text((Strong(f"{spur.words}. "), _found(spur, left)))]
    shown, rest = spur.candidates[:_ROWS], spur.candidates[_ROWS:]
    if shown:
        pieces.append(_table(spur, shown, f"Candidates for the {spur.words[:1].lower()}{spur.words[1:]}"))
    if rest:
        pieces.append(Folded(f"{len(rest)} more candidates", (_table(spur, rest, "More candidates"),)))
    return [*pieces, *_next(spur, left)]


def _found(spur: Spur, left: Sequence[Candidate]) -> str:
    heard = list(dict.fromkeys(spot_words(each, spur) for each in spur.candidates))
    count = len(spur.candidates)
    if not count:
        return f"No product up to order {spur.order} lands there."
    products = "One product" if count == 1 else f"{count} products"
    verb = "lands" if count == 1 else "land"
    said = f"{products} up to order {spur.order} {verb} on {' or '.join(heard)}"
    return f"{said}; {len(left)} {'is' if len(left) == 1 else 'are'} left after the evidence."


def spot_words(candidate: Candidate, spur: Spur) -> str:
    """What a candidate lands on: the signal frequency, an IF, or the place where it was seen."""
    spot = candidate.spot
    at = show_frequency(round(spot.frequency_hz, 1))
    if not spur.setting.display:
        return f"{at} behind {spur.where}"
    if spot.name == SIGNAL:
        return f"the signal frequency {at}"
    several = sum(1 for each in spur.setting.spots if each.lo >= 0) > 1
    return f"the IF {at} behind {spot.name}" if several else f"the IF {at}"


def _table(spur: Spur, found: Sequence[Candidate], caption: str) -> Table:
    """Verdict beside the product, so that a phone shows both; columns that would be empty are left out."""
    columns: list[tuple[str, list[Line]]] = [
        ("product", [each.words for each in found]),
        ("verdict", [Verdict(STRUCK if each.struck else POSSIBLE) for each in found]),
        ("what it is", [each.response for each in found]),
        ("order", [str(each.order) for each in found]),
        ("lands on", [spot_words(each, spur) for each in found]),
        ("off by", [show_delta(round(each.offset_hz, 1), "Hz") for each in found]),
    ]
    if spur.trial is not None:
        columns.append(("in the next trial", [spur.trial.outcome_of(each) for each in found]))
    columns.append(("what speaks against it", ["; ".join(each.struck) for each in found]))
    columns = [(head, cells) for head, cells in columns if any(cells)]
    heads = tuple(head for head, _ in columns)
    rows = tuple(zip(*(cells for _, cells in columns), strict=True))
    return Table(heads, rows, caption, frozenset(heads.index(head) for head in ("order", "off by")))


def _next(spur: Spur, left: Sequence[Candidate]) -> list[Piece]:
    if not left:
        hint = "Name more sources, or look at higher orders: 'order' goes to 15."
        said = "The evidence strikes out all of them." if spur.candidates else "None of the known sources makes it."
        return [Note(f"{said} {hint}", "caution")]
    if len(left) == 1:
        return [Note(("Only ", Strong(_named(left[0])), " is left."), "good")]
    if spur.trial is None:
        words = f"No shift and no drop of a level tells the {len(left)} apart that are left."
        return [Note(f"{words} Close the input, screen or switch off one source after the other.", "caution")]
    pieces: list[Piece] = [Note((Strong("Next: "), spur.trial.words))]
    rows: list[tuple[Line, ...]] = [(outcome, _several(found)) for outcome, found in spur.trial.outcomes]
    return [*pieces, Table(("if the spur ...", "then it is"), tuple(rows), "What the next trial tells apart")]


def _named(candidate: Candidate) -> str:
    return f"{candidate.words} ({candidate.response})" if candidate.response else candidate.words


def _several(found: Sequence[Candidate]) -> str:
    words = [_named(each) for each in found[:_NAMED]]
    more = len(found) - len(words)
    return " or ".join(words) + (f", or one of {more} more" if more else "")


def sources_piece(sources: Sequence[SpurSource], order: int) -> Piece:
    """What was combined."""
    rows: list[tuple[Line, ...]] = []
    for each in sources:
        offset = show_delta(each.frequency_hz, "Hz")
        frequency = f"tuning {offset}" if each.follows else show_frequency(each.frequency_hz)
        if each.tolerance_hz:
            frequency += f" ± {show_frequency(round(each.tolerance_hz, 1))}"
        own = "by the input" if each.enters else "inside"
        rows.append((each.name, frequency, own, "" if each.harmonics is None else str(each.harmonics), each.note))
    head = ("source", "frequency", "comes in", "harmonics", "note")
    caption = f"Combined alone, two and three at a time, up to order {order}"
    return Folded("Which sources were combined", (Table(head, tuple(rows), caption, frozenset({1, 3})),))
