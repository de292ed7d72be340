"""One vectorised cascade over all copies, and what it says of the chain."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from logbook.hardware import Chain
from logbook.physics.cascade import Cascade, Stages, cascade
from logbook.physics.constants import T0, Array
from logbook.prediction.copies import Copies, gains, limit, own_temperature, source_temperature
from logbook.prediction.data import Estimate, Node, Prediction, Terms
from logbook.prediction.totals import Totals, first_unknown, headroom

LIMITS = ("iip3", "iip2", "ip1db")


_OWN_TERMS = Terms()


def predict(chain: Chain, terms: Terms = _OWN_TERMS) -> Prediction:
    """Evaluate a chain once, all perturbed copies together.

    Gains in dB, levels in dBm, frequencies in Hz. Friis and intercept sums as `physics.cascade`; doubt by the law of
    propagation, first order, central differences. Source: JCGM 100:2008 5.1.
    """
    copies = Copies(chain, terms)
    gain, wanted, top = gains(copies)
    temperatures, images = zip(*(own_temperature(copies, i, gain) for i in range(len(chain.stages))), strict=True)
    limits = {name: limit(copies, gain, name) for name in LIMITS}
    stages = Stages(
        gain,
        np.stack(temperatures, axis=-1),
        np.stack(images, axis=-1),
        limits["iip3"],
        limits["iip2"],
        limits["ip1db"],
    )
    source = source_temperature(copies, terms)
    done = cascade(stages, source, chain.in_phase)
    totals = Totals(copies, terms, stages, done, wanted, top).all()
    return Prediction(
        chain=chain,
        terms=terms,
        nodes=_nodes(copies, stages, done, totals, terms),
        totals=totals,
        source_share=float(done.source_share[0]),
        source_temperature_k=float(source[0]),
        ideal={name: ideal(chain, name) for name in LIMITS},
        noise_unknown_from=first_unknown(chain, stages),
        held_at=held(wanted, top, chain),
        frequencies_hz=tuple(copies.frequencies),
        nominal=nominal(stages),
    )


def nominal(stages: Stages) -> Stages:
    """The unperturbed copy alone, [stages]."""
    return Stages(
        gain_db=stages.gain_db[0],
        own_temperature_k=stages.own_temperature_k[0],
        image=stages.image[0],
        iip3_dbm=stages.iip3_dbm[0],
        iip2_dbm=stages.iip2_dbm[0],
        ip1db_dbm=stages.ip1db_dbm[0],
    )


def ideal(chain: Chain, name: str) -> tuple[str, ...]:
    output = "o" + name.removeprefix("i")
    return tuple(s.name for s in chain.stages if name not in s.parameters and output not in s.parameters)


def held(wanted: Array | None, top: float, chain: Chain) -> str:
    if wanted is None or chain.lineup is None:
        return ""
    stage = chain.stage(chain.lineup.adjust)
    low = stage.gain_range[0] if stage is not None and stage.gain_range is not None else -np.inf
    return "top" if wanted[0] > top else "bottom" if wanted[0] < low else ""


def _nodes(
    copies: Copies, stages: Stages, done: Cascade, totals: Mapping[str, Estimate], terms: Terms
) -> tuple[Node, ...]:
    chain = copies.chain
    level = chain.level.value if chain.level is not None else np.nan
    bandwidth = terms.bandwidth_hz or (chain.bandwidth_hz.value if chain.bandwidth_hz is not None else np.nan)
    noise = done.noise_dbm_per_hz[0] + 10 * np.log10(bandwidth)
    room = headroom(stages, done, copies.scalar("level", chain.level))[0]
    image = np.asarray(stages.image)[0]
    with np.errstate(invalid="ignore", divide="ignore"):
        factor = 1 + np.asarray(stages.own_temperature_k)[0] / T0 + image
        own_nf = 10 * np.log10(np.where(factor > 0, factor, np.nan))
    return tuple(
        Node(
            stage=stage.name,
            frequency_hz=copies.frequencies[i + 1],
            stage_gain_db=float(stages.gain_db[0, i]),
            stage_nf_db=float(own_nf[i]),
            gain_db=float(done.gain_db[0, i]),
            nf_db=float(done.nf_db[0, i]),
            noise_dbm=float(noise[i]),
            level_dbm=float(level + done.gain_db[0, i]),
            iip3_dbm=_finite(done.iip3_dbm[0, i]),
            iip2_dbm=_finite(done.iip2_dbm[0, i]),
            ip1db_dbm=_finite(done.ip1db_dbm[0, i]),
            headroom_db=_finite(room[i]),
            noise_share=float(done.noise_share[0, i]),
            iip3_share=float(done.iip3_share[0, i]),
        )
        for i, stage in enumerate(chain.stages)
    )


def _finite(value: float) -> float:
    return float(value) if np.isfinite(value) else float("nan")
