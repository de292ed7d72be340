"""`target`: a limit that the project wants a result to meet."""

from __future__ import annotations

import re

from logbook.fields import Field, quantity, text
from logbook.findings import Target
from logbook.kind import Kind, Outcome, Session, View
from logbook.model import Block, Values, result_key
from logbook.pieces import Piece
from logbook.problems import Place, did_you_mean
from logbook.quantities import KNOWN, known_quantity
from logbook.quantity import QuantityError, read_quantity
from logbook.showing.targets import targets_table
from logbook.units import DIMENSIONS

FIELDS = (
    Field("chain", text()),
    Field("quantity", text(), required=True, help="Such as 'quantity: noise_floor'."),
    Field("name", text()),
    Field("at", quantity("frequency", positive=True)),
    Field("rbw", quantity("frequency", positive=True)),
    Field("source_temperature", quantity("noise_temperature", positive=True)),
    Field("limit", text(), required=True, help="Such as '<= -125 dBm', '>= 6 dB' or '40 dB .. 44 dB'."),
    Field("why", text()),
)

EXAMPLE = """\
quantity: noise_floor
at: 50.1 MHz
rbw: 10 kHz
limit: <= -125 dBm
why: below the galactic noise at this site
"""

_LIMIT = re.compile(r"\s*(?:(?P<sign><=|>=|≤|≥)\s*(?P<one>.+?)|(?P<low>.+?)\s*\.\.\s*(?P<high>.+?))\s*")


def declare(values: Values, session: Session) -> Target | None:
    """The target as written."""
    chain = session.chain_name(values)
    name = values["quantity"]
    known = known_quantity(name)
    if known is None and (hint := did_you_mean(name, KNOWN)).startswith("Did"):
        session.fault(values.place("quantity"), "unknown-quantity", f"'{name}' is no quantity known by name.", hint)
        return None
    dimension = known.dimension if known else tuple(DIMENSIONS)
    limits = _limits(values["limit"], dimension, values.place("limit"), session)
    if chain is None or limits is None:
        return None
    low, high, unit = limits
    at = values["at"].value if "at" in values else None
    return Target(
        chain=chain,
        quantity=name,
        at_hz=at,
        name=values.get("name", ""),
        rbw_hz=values["rbw"].value if "rbw" in values else None,
        source_temperature_k=values["source_temperature"].value if "source_temperature" in values else None,
        low=low,
        high=high,
        unit=unit,
        written=values["limit"],
        why=values.get("why", ""),
        entry=session.entry.path,
        place=values.start,
        key=result_key(chain, name, at, values.get("name", "")),
    )


def _limits(
    written: str, dimension: str | tuple[str, ...], place: Place, session: Session
) -> tuple[float | None, float | None, str] | None:
    found = _LIMIT.fullmatch(written)
    if found is None:
        hint = "Such as '<= -125 dBm', '>= 6 dB' or '40 dB .. 44 dB'."
        session.fault(place, "limit", f"'{written}' is no limit.", hint)
        return None
    try:
        if found["sign"]:
            offset = found.start("one")
            one = read_quantity(found["one"], dimension, "limit")
            low, high = (None, one.value) if found["sign"] in ("<=", "≤") else (one.value, None)
            return low, high, one.unit
        offset = found.start("low")
        first = read_quantity(found["low"], dimension, "limit")
        offset = found.start("high")
        last = read_quantity(found["high"], dimension, "limit")
    except QuantityError as error:
        there = Place(place.file, place.line, place.column + offset + error.offset)
        session.fault(there, error.code, error.message, error.hint)
        return None
    if first.value > last.value or first.unit != last.unit:
        session.fault(place, "limit", f"'{written}' runs from high to low; the lower limit comes first.")
        return None
    return first.value, last.value, first.unit


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The targets of this block against the revision that the entry speaks of."""
    found = [target for target in outcome.data or () if isinstance(target, Target)]
    label = view.revision.label if view.revision is not None else ""
    verdicts = {v.target.key: v for v in view.findings.targets_of(label)}
    return [targets_table(found, verdicts, label)] if found else []


KIND = Kind(
    word="target",
    title="Targets",
    about="Limits that the project wants its results to meet.",
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    declare=declare,
    show=show,
)
