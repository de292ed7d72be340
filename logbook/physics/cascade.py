"""The cascade: gain, noise, intercepts and compression along a chain, for many perturbed copies at once.

Arrays have the stages on the last axis. Leading axes are copies of the chain (one per perturbed parameter, one per
Monte Carlo trial) and are broadcast against one another.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from logbook.physics.constants import T0, Array
from logbook.physics.decibels import db_from_ratio, ratio_from_db
from logbook.physics.noise import density_from_temperature


@dataclass(frozen=True)
class Stages:
    """What the cascade is computed from; every array is [..., n], n stages.

    gain_db: available power gain. own_temperature_k: the stage's own noise at its input, nan where not known.
    image: 1/R, linear; 0 where the image is fully rejected and for everything that is no mixer.
    iip3_dbm, iip2_dbm, ip1db_dbm: +inf where ideal. Source: see `cascade`.
    """

    gain_db: Array
    own_temperature_k: Array
    image: Array
    iip3_dbm: Array
    iip2_dbm: Array
    ip1db_dbm: Array


@dataclass(frozen=True)
class Cascade:
    """What comes out; [..., n] at the output of each stage, the last one being the chain's total.

    nf_db and noise_temperature_k = T0 (F - 1) refer to a source at T0; the densities (dBm/Hz) to the actual source:
    noise_dbm_per_hz at the node, input_noise_dbm_per_hz = the same over the wanted gain (the noise floor).
    iip3, iip2, ip1db in dBm at the chain's input, +inf where all are ideal.
    noise_share, iip3_share [..., n] are parts of the chain's total by stage, source_share [...] the source's part.
    Source: see `cascade`.
    """

    gain_db: Array
    nf_db: Array
    noise_temperature_k: Array
    input_noise_dbm_per_hz: Array
    noise_dbm_per_hz: Array
    iip3_dbm: Array
    iip2_dbm: Array
    ip1db_dbm: Array
    noise_share: Array
    source_share: Array
    iip3_share: Array


def cascade(stages: Stages, source_temperature_k: Array | float = T0, in_phase: bool = True) -> Cascade:
    """Everything along the chain; source_temperature_k (K) is a number or one per copy, shape [...].

    Noise: T_out = g (T_in (1 + image) + T_own) at each stage; F with T_in = T0 at the input. A stage whose own
    temperature is nan leaves the noise nan from there on, and all shares of it. The part a mixer adds through its
    image, T_in * image, counts for what stands ahead of it: source and stages ahead share it in proportion.
    Intercepts: see `input_intercept`; in_phase is the worst case. Compression adds like the third
    order in phase, which is a convention, not a law. iip3_share is nan where every stage is ideal.
    Source: Friis 1944; PHYSICS check values (Pozar, Microwave Engineering 4th ed., Ex. 10.2 and 10.4).
    """
    gain_db = np.cumsum(stages.gain_db, axis=-1)
    before_db = gain_db - stages.gain_db
    at_input, images = noise_at_input(stages, before_db)
    source = np.asarray(source_temperature_k, dtype=np.float64)[..., np.newaxis]
    own = np.cumsum(at_input, axis=-1)
    floor = images * (source + own)
    all_noise = source + own[..., -1:]
    factor = images * (1.0 + own / T0)
    density = density_from_temperature(floor)
    third = 1.0 if in_phase else 2.0
    return Cascade(
        gain_db=gain_db,
        nf_db=db_from_ratio(factor),
        noise_temperature_k=T0 * (factor - 1.0),
        input_noise_dbm_per_hz=density,
        noise_dbm_per_hz=density + gain_db,
        iip3_dbm=input_intercept(before_db, stages.iip3_dbm, third),
        iip2_dbm=input_intercept(before_db, stages.iip2_dbm, third / 2.0),
        ip1db_dbm=input_intercept(before_db, stages.ip1db_dbm, 1.0),
        noise_share=_share(at_input, all_noise),
        source_share=_share(source, all_noise)[..., 0],
        iip3_share=intercept_share(before_db, stages.iip3_dbm, third),
    )


def gain_before_db(gain_db: Array) -> Array:
    """Gain (dB) from the chain's input to each stage's input, [..., n]; 0 for the first. Source: closed form."""
    before: Array = np.cumsum(gain_db, axis=-1) - gain_db
    return before


def input_intercept(before_db: Array, intercept_dbm: Array, power: float) -> Array:
    """1/total^p = sum (G_pre/IIP_i)^p up to each node: dB and dBm [..., n] to dBm at the chain's input [..., n].

    p = 1: third order in phase, and compression by convention; p = 2: third order with random phases;
    p = 1/2 and 1: second order, in phase and random. +inf where all are ideal.
    Source: Razavi, RF Microelectronics (third order); common practice (second order, compression).
    """
    total = np.cumsum(intercept_terms(before_db, intercept_dbm, power), axis=-1)
    with np.errstate(divide="ignore"):
        mw = np.power(total, -1.0 / power)
    return db_from_ratio(mw)


def intercept_share(before_db: Array, intercept_dbm: Array, power: float) -> Array:
    """Each stage's part of the sum in `input_intercept`, [..., n] (1); nan where every stage is ideal.

    Source: closed form.
    """
    terms = intercept_terms(before_db, intercept_dbm, power)
    return _share(terms, np.sum(terms, axis=-1, keepdims=True))


def intercept_terms(before_db: Array, intercept_dbm: Array, power: float) -> Array:
    """(G_pre/IIP_i)^p, the terms of `input_intercept` in 1/mW^p, [..., n]; 0 for an ideal stage. Source: see there."""
    return ratio_from_db(np.asarray(power * (before_db - intercept_dbm), dtype=np.float64))


def noise_at_input(stages: Stages, before_db: Array) -> tuple[Array, Array]:
    """Own temperatures (K) at the chain's input, as if they came with the source; and the product of 1 + image so far.

    T_own / (G_pre product), and the product up to and with each stage (1); both [..., n]. Source: see `cascade`.
    """
    images: Array = np.cumprod(1.0 + stages.image, axis=-1, dtype=np.float64)
    return stages.own_temperature_k / (ratio_from_db(before_db) * images), images


def _share(parts: Array, total: Array) -> Array:
    with np.errstate(divide="ignore", invalid="ignore"):
        share: Array = np.where(total == 0.0, np.nan, parts / total)
    return share
