"""Intercepts, compression, and what follows from them and the noise floor."""

from __future__ import annotations

from logbook.physics.constants import V

COMPRESSION_DB = 1.0
"""dB the gain has dropped by at the 1 dB compression point. Source: definition."""


def output_intercept(input_dbm: V, gain_db: V) -> V:
    """OIPn = IIPn + G, dBm and dB to dBm, any shape; +inf stays. Source: definition."""
    return input_dbm + gain_db


def input_intercept_from_output(output_dbm: V, gain_db: V) -> V:
    """IIPn = OIPn - G, dBm and dB to dBm, any shape; +inf stays. Source: definition."""
    return output_dbm - gain_db


def output_compression(ip1db_dbm: V, gain_db: V) -> V:
    """OP1dB = IP1dB + G - 1 dB: dBm and small-signal gain (dB) to dBm, any shape; the gain is 1 dB less there.

    Source: definition.
    """
    return ip1db_dbm + gain_db - COMPRESSION_DB


def input_compression_from_output(op1db_dbm: V, gain_db: V) -> V:
    """IP1dB = OP1dB - G + 1 dB: dBm and small-signal gain (dB) to dBm, any shape. Source: definition."""
    return op1db_dbm - gain_db + COMPRESSION_DB


def sfdr(iip3_dbm: V, noise_floor_dbm: V) -> V:
    """2/3 (IIP3 - noise floor): dBm at the input to dB, any shape; inf for an ideal chain, nan for unknown noise.

    Source: Razavi, RF Microelectronics 2.4.
    """
    return (iip3_dbm - noise_floor_dbm) * 2.0 / 3.0


def second_order_sfdr(iip2_dbm: V, noise_floor_dbm: V) -> V:
    """1/2 (IIP2 - noise floor): dBm at the input to dB, any shape. Source: closed form, as the third order."""
    return (iip2_dbm - noise_floor_dbm) / 2.0


def linear_range(ip1db_dbm: V, noise_floor_dbm: V) -> V:
    """IP1dB - noise floor: dBm at the input to dB, any shape. Source: common practice."""
    return ip1db_dbm - noise_floor_dbm


def sensitivity(noise_floor_dbm: V, snr_db: V) -> V:
    """Noise floor + wanted signal-to-noise: dBm and dB to dBm at the input, any shape. Source: common practice."""
    return noise_floor_dbm + snr_db


def headroom(ip1db_dbm: V, level_dbm: V) -> V:
    """IP1dB - level, both at the same port: dBm to dB, any shape; negative means compression.

    Source: common practice.
    """
    return ip1db_dbm - level_dbm


def third_order_product(tone_dbm: V, ip3_dbm: V) -> V:
    """3 P - 2 IP3: level (dBm) of the third-order product of two tones of P each, same port, any shape.

    Holds well below compression. Source: definition of the intercept.
    """
    return 3.0 * tone_dbm - 2.0 * ip3_dbm


def second_order_product(tone_dbm: V, ip2_dbm: V) -> V:
    """2 P - IP2: level (dBm) of the second-order product of two tones of P each, same port, any shape.

    Source: definition of the intercept.
    """
    return 2.0 * tone_dbm - ip2_dbm


def intercept_from_two_tones(tone_dbm: V, product_dbm: V, order: int) -> V:
    """IPn = P + (P - product)/(n - 1): two-tone measurement, dBm at one port to dBm, any shape; n from 2 up.

    Source: definition of the intercept.
    """
    return tone_dbm + (tone_dbm - product_dbm) / (order - 1.0)
