"""What one stage alone could do for the chain: the total if it were ideal, and what it would have to become."""

from __future__ import annotations

import numpy as np

from logbook.physics.cascade import Stages, gain_before_db, intercept_terms, noise_at_input
from logbook.physics.constants import T0, Array
from logbook.physics.decibels import db_from_ratio, positive_or_nan, ratio_from_db


def each_ideal(stages: Stages) -> Stages:
    """Copies of a chain [n] with one stage after the other made ideal: [n, n], copy i has stage i so.

    Ideal: no noise of its own (0 K), no distortion, no compression (+inf dBm); gain and image stay. An own temperature
    that is not known stays so in the other copies. Source: definition.
    """
    n = stages.gain_db.shape[-1]
    here = np.eye(n, dtype=bool)
    return Stages(
        gain_db=np.broadcast_to(stages.gain_db, (n, n)),
        own_temperature_k=np.where(here, 0.0, stages.own_temperature_k),
        image=np.broadcast_to(stages.image, (n, n)),
        iip3_dbm=np.where(here, np.inf, stages.iip3_dbm),
        iip2_dbm=np.where(here, np.inf, stages.iip2_dbm),
        ip1db_dbm=np.where(here, np.inf, stages.ip1db_dbm),
    )


def needed_own_temperature(stages: Stages, target_k: Array | float, source_temperature_k: Array | float = T0) -> Array:
    """Own temperature (K) each stage alone would need for the chain to reach a target, [..., n].

    target_k [...]: output noise over wanted gain as a temperature (K): p/k of a wanted noise density p with the actual
    source, or T0 F of a wanted noise figure with the source at T0. Negative: this stage alone cannot do it; nan where
    another stage's noise is not known. Solves images (T_source + sum of T_own at the input) = target for one T_own.
    Source: closed form from Friis 1944.
    """
    before_db = gain_before_db(stages.gain_db)
    at_input, images = noise_at_input(stages, before_db)
    source = np.asarray(source_temperature_k, dtype=np.float64)[..., np.newaxis]
    target = np.asarray(target_k, dtype=np.float64)[..., np.newaxis]
    allowed = target / images[..., -1:] - source - _sum_of_others(at_input)
    needed: Array = allowed * ratio_from_db(before_db) * images
    return needed


def needed_nf(own_temperature_k: Array, image: Array) -> Array:
    """F = 1 + T_own/T0 + image: own temperature (K) as the single-sideband noise figure (dB), any shape.

    nan for an own temperature below zero, which no stage has. Source: IEEE definition of noise figure.
    """
    possible = np.where(own_temperature_k >= 0.0, own_temperature_k, np.nan)
    return db_from_ratio(np.asarray(1.0 + possible / T0 + image))


def needed_intercept(gain_db: Array, intercept_dbm: Array, target_dbm: Array | float, power: float) -> Array:
    """Input intercept (dBm) each stage alone would need for the chain's to reach a target (dBm, [...]), [..., n].

    `power` as in `cascade.input_intercept`. nan: not even an ideal stage here would do.
    Source: closed form from the sum of intercepts.
    """
    before_db = gain_before_db(gain_db)
    terms = intercept_terms(before_db, intercept_dbm, power)
    target = np.asarray(target_dbm, dtype=np.float64)[..., np.newaxis]
    allowed = positive_or_nan(ratio_from_db(-power * target) - _sum_of_others(terms))
    needed: Array = before_db - db_from_ratio(allowed) / power
    return needed


def _sum_of_others(parts: Array) -> Array:
    # Summed without the stage, not total less stage: so one that is not known, or far above the rest, stays out.
    n = parts.shape[-1]
    others: Array = np.where(np.eye(n, dtype=bool), 0.0, parts[..., np.newaxis, :]).sum(axis=-1)
    return others
