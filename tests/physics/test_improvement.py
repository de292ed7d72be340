"""What a stage would have to become, checked by making it so and asking the cascade."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from logbook.physics import improvement
from logbook.physics.cascade import Stages, cascade
from logbook.physics.noise import own_temperature_from_nf

GAIN = np.array([-1.2, 18.0, -6.5, 20.0])
IMAGE = np.array([0.0, 0.0, 0.1, 0.0])


def receiver() -> Stages:
    return Stages(
        gain_db=GAIN,
        own_temperature_k=own_temperature_from_nf(np.array([1.2, 1.1, 7.0, 9.0]), IMAGE),
        image=IMAGE,
        iip3_dbm=np.array([np.inf, 6.0, 13.0, 2.0]),
        iip2_dbm=np.array([np.inf, 30.0, 50.0, 25.0]),
        ip1db_dbm=np.array([np.inf, -8.0, 3.0, -10.0]),
    )


def with_stage(stages: Stages, name: str, i: int, value: float) -> Stages:
    values = getattr(stages, name).copy()
    values[i] = value
    return replace(stages, **{name: values})


def test_each_stage_made_ideal_in_turn() -> None:
    stages = receiver()
    copies = cascade(improvement.each_ideal(stages))
    for i in range(4):
        one = with_stage(with_stage(stages, "own_temperature_k", i, 0.0), "iip3_dbm", i, math.inf)
        alone = cascade(one)
        assert copies.nf_db[i, -1] == pytest.approx(alone.nf_db[-1])
        assert copies.iip3_dbm[i, -1] == pytest.approx(alone.iip3_dbm[-1])


def test_an_unknown_stage_made_ideal_makes_the_noise_known() -> None:
    copies = cascade(improvement.each_ideal(with_stage(receiver(), "own_temperature_k", 1, math.nan)))
    assert np.isnan(copies.nf_db[:, -1]).tolist() == [True, False, True, True]


def test_needed_noise_of_each_stage() -> None:
    """A figure 0.3 dB better: the stages that can do it alone do so when they get what is said, the others cannot."""
    stages = receiver()
    target_db = cascade(stages).nf_db[-1] - 0.3
    needed = improvement.needed_own_temperature(stages, 290.0 * 10 ** (target_db / 10))
    assert (needed >= 0).any()
    for i in range(4):
        made = cascade(with_stage(stages, "own_temperature_k", i, needed[i]))
        assert made.nf_db[-1] == pytest.approx(target_db)
        figure = improvement.needed_nf(needed, stages.image)[i]
        if needed[i] < 0:
            assert math.isnan(figure)
            assert cascade(improvement.each_ideal(stages)).nf_db[i, -1] > target_db
        else:
            assert own_temperature_from_nf(figure, IMAGE[i]) == pytest.approx(needed[i])


def test_needed_noise_for_a_floor_with_the_actual_source() -> None:
    stages = receiver()
    density = cascade(stages, 2000.0).input_noise_dbm_per_hz[-1] - 0.05
    needed = improvement.needed_own_temperature(stages, 10 ** ((density - 30) / 10) / 1.380649e-23, 2000.0)
    made = cascade(with_stage(stages, "own_temperature_k", 1, needed[1]), 2000.0)
    assert made.input_noise_dbm_per_hz[-1] == pytest.approx(density)


@pytest.mark.parametrize(("name", "power"), [("iip3_dbm", 1.0), ("iip2_dbm", 0.5), ("ip1db_dbm", 1.0)])
def test_needed_intercept_of_each_stage(name: str, power: float) -> None:
    stages = receiver()
    target = getattr(cascade(stages), name)[-1] + 0.5
    needed = improvement.needed_intercept(stages.gain_db, getattr(stages, name), target, power)
    ideal = getattr(cascade(improvement.each_ideal(stages)), name)[:, -1]
    assert np.isnan(needed).tolist() == (ideal < target).tolist()
    assert np.isfinite(needed).any()
    for i in np.flatnonzero(np.isfinite(needed)):
        made = cascade(with_stage(stages, name, int(i), needed[i]))
        assert getattr(made, name)[-1] == pytest.approx(target)


def test_many_copies_at_once() -> None:
    stages = receiver()
    targets = np.array([200.0, 400.0, 600.0])
    together = improvement.needed_own_temperature(stages, targets)
    assert together.shape == (3, 4)
    assert together[1] == pytest.approx(improvement.needed_own_temperature(stages, 400.0))
