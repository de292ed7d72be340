"""Doubt of any function: the `uncertainties` library, Monte Carlo, and where a function ends."""

from __future__ import annotations

import math

import numpy as np
import pytest
from uncertainties import ufloat, umath

from logbook.physics.propagation import curved, propagate


def test_product_and_logarithm_against_the_library() -> None:
    inputs = {"v": (13.8, 0.05), "i": (0.71, 0.01), "t": (0.35, 0.002), "r": (50.0, None)}

    def function(given: dict[str, float]) -> float:
        return 10 * math.log10(given["v"] * given["i"] / given["r"]) + 30 * given["t"]

    value, parts = propagate(function, inputs)
    v, i, t = (ufloat(*inputs[name]) for name in "vit")
    expected = 10 * umath.log10(v * i / 50.0) + 30 * t
    assert value == pytest.approx(expected.nominal_value)
    assert math.hypot(*parts.values()) == pytest.approx(expected.std_dev, rel=1e-4)
    assert set(parts) == {"v", "i", "t"}
    shares = {name: expected.derivatives[x] * x.std_dev for name, x in (("v", v), ("i", i), ("t", t))}
    assert parts == pytest.approx(shares, rel=1e-3)


def test_sign_tells_which_way_an_input_moves_the_value() -> None:
    _, parts = propagate(lambda given: given["a"] - 3 * given["b"], {"a": (1.0, 0.5), "b": (2.0, 0.5)})
    assert parts == pytest.approx({"a": 0.5, "b": -1.5})


def test_square_is_exact_and_a_top_has_no_first_order() -> None:
    """JCGM 101:2008 9.4: x1² + x2² at 0 with u = 0.005; by first order its doubt is 0, by Monte Carlo 50e-6."""

    def squares(given: dict[str, float]) -> float:
        return given["x1"] ** 2 + given["x2"] ** 2

    inputs = {"x1": (0.0, 0.005), "x2": (0.0, 0.005)}
    assert propagate(squares, inputs) == (0.0, {})
    assert curved(squares, inputs) == ("x1", "x2")
    value, parts = propagate(squares, {"x1": (3.0, 0.1), "x2": (0.0, None)})
    assert (value, parts) == (9.0, {"x1": pytest.approx(2 * 3.0 * 0.1)})


def test_monte_carlo_where_it_bends() -> None:
    """10 lg of a difference; a wide doubt in the second term is called curved, a narrow one is not."""

    def function(given: dict[str, float]) -> float:
        left = 10 ** (given["m"] / 10) - 10 ** (given["n"] / 10)
        return 10 * math.log10(left) if left > 0 else math.nan

    narrow = {"m": (3.0, 0.05), "n": (0.0, 0.05)}
    random = np.random.default_rng(2)
    m, n = (random.normal(*narrow[name], 200_000) for name in "mn")
    drawn = 10 * np.log10(10 ** (m / 10) - 10 ** (n / 10))
    _, parts = propagate(function, narrow)
    assert math.hypot(*parts.values()) == pytest.approx(float(np.std(drawn)), rel=0.01)
    assert curved(function, narrow) == ()
    assert curved(function, {"m": (3.0, 0.05), "n": (0.0, 1.5)}) == ("n",)


def test_where_a_function_ends_on_one_side_the_other_stands_for_both() -> None:
    def root(given: dict[str, float]) -> float:
        return math.sqrt(given["x"]) if given["x"] >= 0 else math.nan

    value, parts = propagate(root, {"x": (0.5, 0.7)})
    assert value == math.sqrt(0.5)
    assert parts == {"x": pytest.approx(math.sqrt(1.2) - math.sqrt(0.5))}
    assert curved(root, {"x": (0.5, 0.7)}) == ("x",)


def test_what_is_undefined_stays_so() -> None:
    value, parts = propagate(lambda _: math.nan, {"x": (1.0, 0.1)})
    assert math.isnan(value)
    assert math.isnan(parts["x"])


def test_nothing_stated_gives_no_parts() -> None:
    assert propagate(lambda given: 2 * given["x"], {"x": (1.0, None)}) == (2.0, {})
