"""Emissions of a transmitter: the level a rule allows, and the bandwidth in which it is judged."""

from __future__ import annotations

import math

# Upper edge of the range (Hz) and its reference bandwidth (Hz).
_REFERENCE = ((150e3, 1e3), (30e6, 10e3), (1e9, 100e3), (math.inf, 1e6))


def allowed_level(
    carrier_dbm: float,
    below_carrier_db: float = math.nan,
    at_most_dbm: float = math.nan,
    log_power_db: float = math.nan,
    not_needed_below_dbm: float = math.nan,
) -> float:
    """The level (dBm) that a spurious emission may have beside a carrier (dBm); nan when nothing limits it.

    The lowest of: the carrier less so many dB; a level; the carrier less A + 10 lg(P/W), which is 30 dBm - A whatever
    the power. Not below `not_needed_below_dbm`. A limit that is nan is not there.
    Source: form of the limits in 47 CFR 97.307(d), (e) and 95.779(a)(3).
    """
    limits = [carrier_dbm - below_carrier_db, at_most_dbm, 30.0 - log_power_db]
    there = [limit for limit in limits if not math.isnan(limit)]
    if not there or math.isnan(carrier_dbm):
        return math.nan
    lowest = min(there)
    return lowest if math.isnan(not_needed_below_dbm) else max(lowest, not_needed_below_dbm)


def reference_bandwidth(frequency_hz: float) -> float:
    """Bandwidth (Hz) in which a spurious emission at a frequency is judged; nan below 9 kHz.

    1 kHz from 9 kHz, 10 kHz from 150 kHz, 100 kHz from 30 MHz, 1 MHz from 1 GHz.
    Source: ITU Radio Regulations, Appendix 3.
    """
    if not frequency_hz >= 9e3:
        return math.nan
    return next(width for edge, width in _REFERENCE if frequency_hz < edge)
