"""Heat: junction temperatures through thermal resistances in series, and the sink that is needed."""

from __future__ import annotations

import math

import numpy as np

from logbook.physics.constants import V


def junction_temperature(power_w: V, resistance_k_per_w: V, from_c: V) -> V:
    """Tj = T + P theta: W, K/W from there to the junction, degC of ambient, sink or case to degC, any shape.

    3.9 W over 3.125 K/W from a case at 76 degC: 88 degC. Source: definition of thermal resistance.
    """
    return from_c + power_w * resistance_k_per_w


def junction_margin(junction_c: V, maximum_c: V) -> V:
    """Tmax - Tj: degC to K, any shape; negative is too hot. Source: definition."""
    return maximum_c - junction_c


def needed_sink(power_w: float, maximum_c: float, ambient_c: float, to_sink_k_per_w: float) -> float:
    """(Tmax - Ta)/P - theta(junction to sink): largest sink-to-ambient resistance, K/W; negative: no sink will do.

    inf for no power, nan for a negative one. Source: definition of thermal resistance.
    """
    if not power_w > 0.0:
        return math.inf if power_w == 0.0 else math.nan
    return (maximum_c - ambient_c) / power_w - to_sink_k_per_w


def allowed_power(ambient_c: V, maximum_c: float, resistance_k_per_w: float, rated_w: float = math.inf) -> V:
    """Derating: (Tmax - Ta)/theta from junction to ambient, W, any shape; at most the rating, at least 0.

    nan for a resistance of zero or less. Source: definition of thermal resistance.
    """
    resistance = resistance_k_per_w if resistance_k_per_w > 0.0 else math.nan
    allowed: V = np.clip((maximum_c - ambient_c) / resistance, 0.0, rated_w)
    return allowed


def regulator_power(input_v: float, output_v: float, load_a: float, own_a: float = 0.0) -> float:
    """(Vin - Vout) I + Vin Iq: V and A to W turned into heat in a series regulator; 3.5 W for 12 to 5 V at 0.5 A.

    Source: closed form.
    """
    return (input_v - output_v) * load_a + input_v * own_a


def amplifier_power(supply_v: float, supply_a: float, output_w: float, input_w: float = 0.0) -> float:
    """V I + Pin - Pout: W turned into heat in an amplifier stage. Source: conservation of energy."""
    return supply_v * supply_a + input_w - output_w
