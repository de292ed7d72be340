"""`target`: a limit that the project wants a result to meet."""

from __future__ import annotations

import re

from logbook.fields import Asked, Field, quantity, text
from logbook.findings import Target
from logbook.kind import Kind, Outcome, Session, View
from logbook.kinds._measured import likely_quantity
from logbook.model import Block, Values, result_key
from logbook.pieces import Piece
from logbook.quantities import known_quantity
from logbook.quantity import Quantity, QuantityError, has_level, level_dbm, read_quantity
from logbook.showing.targets import targets_table
from logbook.stage_fields import LEVEL
from logbook.units import DIMENSIONS
from logbook.yaml_nodes import Node, Scalar


def _limit(node: Node, asked: Asked) -> Scalar | None:
    """The text with its place, so that a fault within it is shown where it stands."""
    return node if text()(node, asked) is not None and isinstance(node, Scalar) else None


FIELDS = (
    Field("chain", text()),
    Field("quantity", text(), required=True, help="Such as 'quantity: noise_floor'."),
    Field("name", text()),
    Field("at", quantity("frequency", positive=True)),
    Field("rbw", quantity("frequency", positive=True)),
    Field("source_temperature", quantity("noise_temperature", positive=True)),
    Field("limit", _limit, required=True, help="Such as '<= -125 dBm', '>= 6 dB' or '40 dB .. 44 dB'."),
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
    if known is None and (hint := likely_quantity(name)).startswith("Did"):
        session.fault(values.place("quantity"), "unknown-quantity", f"'{name}' is no quantity known by name.", hint)
        return None
    dimension: str | tuple[str, ...] = known.dimension if known else tuple(DIMENSIONS)
    # A level may be given in watts or volts, as everywhere.
    dimension = LEVEL if dimension == "level" else dimension
    described = session.chains.get(chain or "")
    impedance = 50.0 if described is None else described.impedance_ohm
    limits = _limits(values["limit"], dimension, impedance, session)
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
        written=values["limit"].text.strip(),
        why=values.get("why", ""),
        entry=session.entry.path,
        place=values.start,
        key=result_key(chain, name, at, values.get("name", "")),
    )


def _limits(
    scalar: Scalar, dimension: str | tuple[str, ...], impedance_ohm: float, session: Session
) -> tuple[float | None, float | None, str] | None:
    written, place = scalar.text, scalar.place
    found = _LIMIT.fullmatch(written)
    if found is None:
        hint = "Such as '<= -125 dBm', '>= 6 dB' or '40 dB .. 44 dB'."
        session.fault(place, "limit", f"'{written}' is no limit.", hint)
        return None
    given: list[tuple[float, str]] = []
    offset = 0
    try:
        for side in ("one",) if found["sign"] else ("low", "high"):
            offset = found.start(side)
            limit = read_quantity(found[side], dimension, "limit")
            if not has_level(limit, dimension):
                message = f"'{found[side]}' is no limit of a level: that needs a power or voltage above zero."
                raise QuantityError("sign", message)
            given.append(_in_base(limit, dimension, impedance_ohm))
    except QuantityError as error:
        session.fault(scalar.at(offset + error.offset), error.code, error.message, error.hint)
        return None
    (first, unit), (last, other) = given[0], given[-1]
    if found["sign"]:
        return (None, last, unit) if found["sign"] in ("<=", "≤") else (first, None, unit)
    if unit != other:
        session.fault(place, "limit", f"'{written}' has limits of two sorts, {unit} and {other}.")
        return None
    if first > last:
        session.fault(place, "limit", f"'{written}' runs from high to low; the lower limit comes first.")
        return None
    return first, last, unit


def _in_base(limit: Quantity, dimension: str | tuple[str, ...], impedance_ohm: float) -> tuple[float, str]:
    """The limit in base units; what limits a level, in dBm."""
    return (level_dbm(limit, impedance_ohm)[0], "dBm") if dimension == LEVEL else (limit.value, limit.unit)


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
