"""One vectorised cascade over all copies, and what it says of the chain."""

from __future__ import annotations

from dataclasses import dataclass
from functools import partial

import numpy as np

from logbook.hardware import Chain
from logbook.physics.cascade import Cascade, Stages, cascade
from logbook.physics.constants import T0, Array
from logbook.prediction.copies import Copies, Draws, gains, limits, own_temperatures, source_temperature
from logbook.prediction.data import LIMITS, LazyTotals, Node, Prediction, Terms
from logbook.prediction.totals import Totals, headroom

_OWN_TERMS = Terms()


@dataclass(frozen=True, slots=True)
class Evaluation:
    """One vectorised cascade over all copies of a chain; it serves predictions in every bandwidth."""

    copies: Copies
    stages: Stages
    done: Cascade
    wanted: Array | None
    top: float
    source_k: Array


def evaluate(chain: Chain, terms: Terms) -> Evaluation:
    """The cascade of a chain at a frequency, with a source, over all perturbed copies together; see `predict`."""
    return _evaluate(Copies(chain, terms), chain, terms)


def _evaluate(copies: Copies, chain: Chain, terms: Terms) -> Evaluation:
    gain, wanted, top = gains(copies)
    temperatures, images = own_temperatures(copies, gain)
    iip3, iip2, ip1db = (limits(copies, gain, name) for name in LIMITS)
    stages = Stages(gain, temperatures, images, iip3, iip2, ip1db)
    source = source_temperature(copies, terms)
    return Evaluation(copies, stages, cascade(stages, source, chain.in_phase), wanted, top, source)


# Above this standard uncertainty of an input (dB) first order is an approximation.
FIRST_ORDER_UP_TO_DB = 1.5
_DRAWS = 20_000


def wide_inputs(chain: Chain) -> list[str]:
    """The inputs whose doubt is above 1.5 dB, in words: first order is then an approximation."""
    return [
        f"{stage.name} {name.replace('_', ' ')}"
        for stage in chain.stages
        for name, parameter in stage.parameters.items()
        if name in _IN_DECIBELS and (parameter.u or 0.0) > FIRST_ORDER_UP_TO_DB
    ]


_IN_DECIBELS = frozenset("gain nf nf_dsb image_rejection iip3 oip3 iip2 oip2 ip1db op1db".split())  # noqa: SIM905


def by_monte_carlo(chain: Chain, terms: Terms = _OWN_TERMS) -> LazyTotals:
    """The totals with their doubt from 20,000 random draws of all inputs. Source: JCGM 101:2008."""
    made = _evaluate(Draws(chain, terms, _DRAWS), chain, terms)
    return Totals(made.copies, terms, made.stages, made.done, made.wanted, made.top).all()


def predict(chain: Chain, terms: Terms = _OWN_TERMS, evaluation: Evaluation | None = None) -> Prediction:
    """What a chain is predicted to do under the terms; an evaluation made for their frequency and source is used.

    Gains in dB, levels in dBm, frequencies in Hz. Friis and intercept sums as `physics.cascade`; doubt by the law of
    propagation, first order, central differences. Source: JCGM 100:2008 5.1.
    """
    made = evaluation if evaluation is not None else evaluate(chain, terms)
    return Prediction(
        chain=chain,
        terms=terms,
        totals=Totals(made.copies, terms, made.stages, made.done, made.wanted, made.top).all(),
        source_share=float(made.done.source_share[0]),
        source_temperature_k=float(made.source_k[0]),
        held_at=held(made.wanted, made.top, chain),
        frequencies_hz=tuple(made.copies.frequencies),
        make_nominal=partial(nominal, made.stages),
        make_nodes=partial(_nodes, made.copies, made.stages, made.done, terms),
    )


class Predictor:
    """Predictions, each made once. Chains are told apart by identity: they are frozen and shared between revisions."""

    def __init__(self) -> None:
        self._known: dict[tuple[int, Terms], Prediction] = {}
        self._evaluated: dict[tuple[int, float | None, float | None], Evaluation] = {}

    def __call__(self, chain: Chain, terms: Terms) -> Prediction:
        """The prediction for a chain under the terms."""
        asked = (id(chain), terms)
        found = self._known.get(asked)
        if found is not None:
            return found
        terms = terms.for_chain(chain)
        found = self._known.get((id(chain), terms))
        if found is None:
            key = (id(chain), terms.at_hz, terms.source_temperature_k)
            evaluation = self._evaluated.get(key)
            if evaluation is None:
                evaluation = self._evaluated[key] = evaluate(chain, terms)
            # The prediction keeps its chain, so that no other can take the identity it is known by.
            found = self._known[(id(chain), terms)] = predict(chain, terms, evaluation)
        self._known[asked] = found
        return found


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


def held(wanted: Array | None, top: float, chain: Chain) -> str:
    if wanted is None or chain.lineup is None:
        return ""
    stage = chain.stage(chain.lineup.adjust)
    low = stage.gain_range[0] if stage is not None and stage.gain_range is not None else -np.inf
    return "top" if wanted[0] > top else "bottom" if wanted[0] < low else ""


def _nodes(copies: Copies, stages: Stages, done: Cascade, terms: Terms) -> tuple[Node, ...]:
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
