"""Cautions that stand where work can hurt somebody. Local codes and licensed practice decide, not this page."""

from __future__ import annotations

from collections.abc import Iterable

from logbook.model import Result
from logbook.pieces import Note, Piece

RF_POWER = (
    "RF power: it burns, and it burns out instruments. Put the loss in before the power, use a dummy load "
    "that bears it, and keep within your licence; local codes and licensed practice decide."
)
VOLTAGE = "Above 50 V: it can kill. Unplug, discharge, work with one hand; local codes and licensed practice decide."
HOT = "Hot parts: they injure and start fires. Let them cool, and keep what burns away from them."

RF_POWER_FROM_DBM = 30.0
VOLTAGE_FROM_V = 50.0
HOT_FROM_DEGC = 60.0


def power_caution(levels_dbm: Iterable[float]) -> list[Piece]:
    """The caution for RF power, when any of the levels reaches one watt."""
    return [Note(RF_POWER, "caution")] if any(level >= RF_POWER_FROM_DBM for level in levels_dbm) else []


def result_cautions(results: Iterable[Result]) -> list[Piece]:
    """The cautions that these results call for: RF power, voltage, heat."""
    found = list(results)
    pieces = power_caution(r.value for r in found if r.unit == "dBm" and r.quantity in ("output_level", "op1db"))
    if any(r.unit == "V" and abs(r.value) >= VOLTAGE_FROM_V for r in found):
        pieces.append(Note(VOLTAGE, "caution"))
    if any(r.unit == "degC" and r.value >= HOT_FROM_DEGC for r in found):
        pieces.append(Note(HOT, "caution"))
    return pieces
