"""A `spurs` block's own words turned into sources, evidence and spurs, with a fault for what does not fit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import sqrt

from logbook.hardware import Chain
from logbook.kind import Session
from logbook.model import Values
from logbook.problems import did_you_mean
from logbook.quantity import Quantity
from logbook.showing.spur_map import Plan
from logbook.showing.spurs import Spur
from logbook.spurs.candidates import candidates
from logbook.spurs.evidence import INPUT, TUNING, Drop, Move, judged
from logbook.spurs.planning import HIGH, Asked, Choice, common_crossings, ranked_choices
from logbook.spurs.setting import SIGNAL, Setting, Spot, SpurSource, at_stage, narrowest, own_sources, spots_of
from logbook.spurs.trials import next_trial

# Beyond this many sources the products of high order are too many to be worth a list.
MOST_SOURCES = 12


@dataclass(frozen=True, slots=True)
class Search:
    """What every spur of a block is searched with. `bandwidth_hz`: None leaves it to the chain's stages."""

    chain: Chain | None
    sources: tuple[SpurSource, ...]
    order: int
    bandwidth_hz: float | None
    rbw_hz: float | None
    session: Session


def search_of(values: Values, chain: Chain | None, session: Session) -> Search | None:
    """The chain's own sources and the named ones; None with a fault where there are none, or too many."""
    sources = [*own_sources(chain), *_named_sources(values, chain, session)]
    if not sources and session.broken:
        return None
    if not sources:
        message = "Nothing is here that could make a spur: no chain, and no 'sources'."
        session.fault(values.start, "no-sources", message, "Name a source, such as {name: clock, frequency: 10 MHz}.")
        return None
    if len(sources) > MOST_SOURCES:
        message = f"{len(sources)} sources are too many to tell anything; at most {MOST_SOURCES} are combined."
        session.fault(values.place("sources"), "too-many-sources", message, "Leave out what has been ruled out.")
        return None
    width, rbw = (values[key].value if key in values else None for key in ("bandwidth", "rbw"))
    return Search(chain, tuple(sources), values.get("order", 7), width, rbw, session)


def _named_sources(values: Values, chain: Chain | None, session: Session) -> list[SpurSource]:
    taken = {TUNING, INPUT, SIGNAL, *(source.name for source in own_sources(chain))}
    found = []
    for item in values.get("sources", ()):
        name = item["name"]
        if name in taken:
            why = "means something of its own here" if name in (TUNING, INPUT) else "is a source already"
            hint = "The chain's oscillators and its signal are there by themselves; give this one another name."
            session.fault(item.place("name"), "duplicate-source", f"'{name}' {why}.", hint)
            continue
        taken.add(name)
        found.append(_source(item))
    return found


def _source(item: Values) -> SpurSource:
    frequency = item["frequency"]
    return SpurSource(
        name=item["name"],
        frequency_hz=frequency.value,
        tolerance_hz=limits_of(frequency) or 0.0,
        enters=item.get("enters") == "input",
        movable=item.get("movable", True),
        harmonics=item.get("harmonics"),
        note=item.get("note", ""),
    )


def limits_of(found: Quantity) -> float | None:
    """The limits written behind a value, `± 2 kHz`, in its base unit; None where no doubt is stated."""
    return None if found.u is None else found.u * sqrt(3.0)


def found_spur(item: Values, search: Search) -> Spur | None:
    """A spur with its candidates, judged; None with a fault where it cannot be said where it was heard."""
    seen, tolerance = item["frequency"].value, _tolerance(item, search.session)
    where = _where(item, search)
    if where is None:
        return None
    setting, heard = _heard(item, where, tolerance, search)
    if not all(spot.half_width_hz > 0 for spot in heard):
        message = f"Nothing says how near to {item['frequency'].written} a product has to land."
        hint = "Write '50.112 MHz ± 2 kHz', or give 'tolerance:', or 'bandwidth:' of the IF."
        search.session.fault(item.place("frequency"), "tolerance", message, hint)
        return None
    moves, drops = _moves(item, search), _drops(item, search)
    whole, found = candidates(setting, search.order, heard)
    found = judged(found, whole, moves, drops)
    trial = next_trial(found, whole, moves, drops, tolerance)
    return Spur(item.get("name", ""), seen, tolerance, where, search.order, whole, tuple(found), trial)


def _tolerance(item: Values, session: Session) -> float:
    written = limits_of(item["frequency"])
    if "tolerance" not in item:
        return written or 0.0
    if written is not None:
        message = "The frequency has its limits with it, and 'tolerance' says the same thing."
        session.fault(item.place("tolerance"), "given-twice", message, "Keep one of them.")
    return float(item["tolerance"].value)


def _where(item: Values, search: Search) -> str | None:
    where: str = item.get("where", SIGNAL)
    stages = [] if search.chain is None else search.chain.stage_names
    if where == SIGNAL:
        if "tuned" in item:
            message = "A spur that is seen at the signal frequency says itself what the unit was tuned to."
            search.session.fault(item.place("tuned"), "given-twice", message, "Leave out 'tuned', or say 'where'.")
        return SIGNAL
    if where in stages:
        return where
    if not search.session.broken:
        message = f"'{where}' is no stage of the chain; a spur is seen behind a stage, or at the signal frequency."
        search.session.fault(item.place("where"), "unknown-stage", message, did_you_mean(where, [SIGNAL, *stages]))
    return None


def _heard(item: Values, where: str, tolerance: float, search: Search) -> tuple[Setting, list[Spot]]:
    seen, chain, sources = item["frequency"].value, search.chain, search.sources
    if chain is None:
        width = tolerance + (search.bandwidth_hz or 0.0) / 2.0
        spots = [Spot(SIGNAL, seen, 0.0, width, (0,) * len(sources))]
        return Setting(sources, tuple(spots), seen), spots
    if where == SIGNAL:
        spots = spots_of(chain, sources, seen, tolerance, search.bandwidth_hz)
        return Setting(sources, tuple(spots), seen), spots
    tuned = item["tuned"].value if "tuned" in item else chain.signal_hz
    spots = spots_of(chain, sources, tuned, tolerance, search.bandwidth_hz)
    stage = chain.stage(where)
    assert stage is not None
    width = tolerance or (search.rbw_hz or 0.0) / 2.0
    there = replace(at_stage(spots, chain, stage), frequency_hz=seen, follows=0.0, half_width_hz=width)
    return Setting(sources, tuple(spots), tuned, display=False), [there]


def _moves(item: Values, search: Search) -> list[Move]:
    names = [TUNING, *(source.name for source in search.sources)]
    found = []
    for each in item.get("moves", ()):
        by, seen = each["by"], each["seen"]
        if _known(each, each["source"], names, search) and _not_zero(each, by, search):
            found.append(Move(each["source"], by.value, seen.value, limits_of(seen)))
    return found


def _drops(item: Values, search: Search) -> list[Drop]:
    names = [INPUT, *(source.name for source in search.sources)]
    found = []
    for each in item.get("drops", ()):
        by, seen, source = each["by"], each["seen"], each.get("source", INPUT)
        if _known(each, source, names, search) and _not_zero(each, by, search):
            found.append(Drop(source, by.value, seen.value, limits_of(seen)))
    return found


def _known(each: Values, source: str, names: Sequence[str], search: Search) -> bool:
    if source in names or search.session.broken:
        return source in names
    message = f"'{source}' is no source of this block, nor one of the chain's own."
    search.session.fault(each.place("source"), "unknown-source", message, did_you_mean(source, names))
    return False


def _not_zero(each: Values, by: Quantity, search: Search) -> bool:
    if by.value:
        return True
    message = f"'{by.written}' at 'by' changes nothing, so that nothing can be learned from it."
    search.session.fault(each.place("by"), "no-change", message, "Write by how much it was changed.")
    return False


def whole_plan(avoid: Values, values: Values, search: Search) -> Plan | None:
    """The choices of IF and oscillator in their rank; None with a fault where something is missing."""
    low, high = avoid["tune"]
    chain, session = search.chain, search.session
    first = next((s for s in chain.stages if s.oscillator is not None), None) if chain is not None else None
    if low.value >= high.value:
        message = f"The tuning range runs from {low.written} to {high.written}; the lower end comes first."
        session.fault(avoid.place("tune"), "pair", message)
        return None
    ifs = [each.value for each in avoid.get("if", ())]
    width = search.bandwidth_hz
    if chain is None and session.broken and (not ifs or width is None):
        # The chain would say it, and it could not be made: that fault is reported where it stands.
        return None
    if chain is not None:
        spots = spots_of(chain, search.sources, chain.signal_hz, 0.0)
        ifs = ifs or [spot.frequency_hz for spot in spots[1:2]]
        width = width or narrowest(chain, chain.stage_names.index(first.name) if first is not None else 0) or None
    if not ifs:
        hint = "Such as 'if: [10.7 MHz, 21.4 MHz]'."
        session.fault(avoid.start, "missing-key", "'avoid' needs the key 'if': no chain says it.", hint)
    if width is None:
        message = "Nothing says how wide the IF is."
        session.fault(avoid.start, "missing-key", message, "Add 'bandwidth:' to the block.")
    if not ifs or width is None:
        return None
    side = avoid.get("side", "both")
    sides = ("high", "low") if side == "both" else (side,)
    asked = Asked((low.value, high.value), width, search.order, _fixed_sources(search, first is not None))
    choices = ranked_choices(asked, list(dict.fromkeys(ifs)), sides)
    return Plan(asked, tuple(choices), tuple(common_crossings(asked)), _built(search, choices))


def _built(search: Search, choices: Sequence[Choice]) -> str:
    """The key of the choice that the chain's first mixer is, when it is among them."""
    chain = search.chain
    spots = [] if chain is None else spots_of(chain, search.sources, chain.signal_hz, 0.0)
    if chain is None or len(spots) < 2:
        return ""
    above = search.sources[spots[1].lo].at(chain.signal_hz) > chain.signal_hz and spots[1].output == "difference"
    for each in choices:
        if abs(each.if_hz - spots[1].frequency_hz) < 1.0 and (each.side == HIGH) == above:
            return each.key
    return ""


def _fixed_sources(search: Search, has_mixer: bool) -> tuple[SpurSource, ...]:
    """What stays while the oscillator is being chosen: named sources, and the oscillators of later mixers."""
    own = own_sources(search.chain)
    planned = {each.name for each in own[: 2 if has_mixer else 1]}
    return tuple(each for each in search.sources if each.name not in planned and not each.follows)
