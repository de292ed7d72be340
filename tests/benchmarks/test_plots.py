"""Drawing: what a plot costs that is not in the cache, once Matplotlib is in."""

from __future__ import annotations

import time
from math import sin

import pytest
from timed import tell

from logbook.pieces import Axis, Chart, Limit, Series
from logbook.plots import draw

pytestmark = pytest.mark.benchmark


def chart(seed: int) -> Chart:
    """Two courses of 601 points, with a limit."""
    x = [50e6 + 100.0 * each for each in range(601)]
    courses = [[-60 + 20 * sin(each / (40 + seed + 5 * which)) for each in range(601)] for which in range(2)]
    series = (Series("now", x, courses[0], "now"), Series("before", x, courses[1], "before"))
    return Chart(Axis("frequency in Hz"), Axis("level in dBm"), series, (Limit("at most -45 dBm", high=-45.0),))


def test_a_plot_costs_thirty_milliseconds() -> None:
    draw(chart(0))
    took = []
    for seed in range(1, 12):
        start = time.perf_counter()
        draw(chart(seed))
        took.append(time.perf_counter() - start)
    tell(f"a plot of two courses of 601 points: {1000 * sorted(took)[len(took) // 2]:.1f} ms")
    assert sorted(took)[len(took) // 2] <= 0.030
