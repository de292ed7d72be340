"""The table of units: prefixes, factors, and what is likely to be meant."""

from __future__ import annotations

import pytest

from logbook.units import CURRENCIES, DECIBEL_DIMENSIONS, DIMENSIONS, PREFIXES, find_unit, likely_unit


@pytest.mark.parametrize(
    ("text", "dimension", "factor", "base"),
    [
        ("mW", "power", 1e-3, "W"),
        ("MW", "power", 1e6, "W"),
        ("uV", "voltage", 1e-6, "V"),
        ("\u00b5V", "voltage", 1e-6, "V"),
        ("\u03bcV", "voltage", 1e-6, "V"),
        ("uVrms", "voltage", 1e-6, "V"),
        ("Ohm", "resistance", 1.0, "ohm"),
        ("\u03a9", "resistance", 1.0, "ohm"),
        ("k\u2126", "resistance", 1e3, "ohm"),
        ("nV/rtHz", "voltage_density", 1e-9, "V/rtHz"),
        ("pA/\u221aHz", "current_density", 1e-12, "A/rtHz"),
        ("mV/dB", "slope", 1e-3, "V/dB"),
        ("dB/mV", "gain_slope", 1e3, "dB/V"),
        ("%", "number", 1e-2, "1"),
        ("h", "time", 3600.0, "s"),
        ("degC/W", "thermal_resistance", 1.0, "K/W"),
        ("EUR", "price", 1.0, "EUR"),
    ],
)
def test_factor_to_the_base_unit(text: str, dimension: str, factor: float, base: str) -> None:
    unit = find_unit(text)
    assert unit is not None
    assert (unit.dimension, unit.factor, unit.base, unit.offset) == (dimension, factor, base, 0.0)


@pytest.mark.parametrize(
    "text", ["mhz", "DBM", "Mw ", "dbm", "hz", "C", "kdB", "mdBm", "kdegC", "mEUR", "", "dB m", "XYZ"]
)
def test_texts_that_are_no_units(text: str) -> None:
    unit = find_unit(text)
    assert unit is None or (text == "" and unit.dimension == "number")


def test_levels_in_decibels_are_offset_not_scaled() -> None:
    # 1 W = 30 dBm, 1 V = 120 dBuV: closed form
    offsets = {text: find_unit(text).offset for text in ("dBm", "dBW", "dBuV", "dBmV", "dBV", "dBW/Hz")}  # type: ignore[union-attr]
    assert offsets == {"dBm": 0.0, "dBW": 30.0, "dBuV": 0.0, "dBmV": 60.0, "dBV": 120.0, "dBW/Hz": 30.0}


def test_kelvin_is_read_in_the_wanted_dimension() -> None:
    kelvin = {name: find_unit("K", (name,)) for name in ("temperature", "noise_temperature", "temperature_difference")}
    assert {name: (unit.offset, unit.base) for name, unit in kelvin.items() if unit} == {
        "temperature": (-273.15, "degC"),
        "noise_temperature": (0.0, "K"),
        "temperature_difference": (0.0, "K"),
    }


def test_a_unit_of_another_dimension_is_still_found() -> None:
    unit = find_unit("dBm", ("ratio",))
    assert unit is not None
    assert unit.dimension == "level"


@pytest.mark.parametrize(
    ("text", "wanted", "meant"),
    [
        ("mhz", "frequency", "MHz"),
        ("KHZ", "frequency", "kHz"),
        ("dbm", "level", "dBm"),
        ("DB", "ratio", "dB"),
        ("Mw", "power", "mW"),
        ("ohms", "resistance", "ohm"),
        ("volts", "voltage", "V"),
        ("c", "temperature", "degC"),
        ("nv/rthz", "voltage_density", "nV/rtHz"),
        ("furlong", "length", ""),
        ("volts", "power", ""),
    ],
)
def test_likely_unit(text: str, wanted: str, meant: str) -> None:
    assert likely_unit(text, (wanted,)) == meant


def test_every_dimension_names_units_of_its_own() -> None:
    for name, dimension in DIMENSIONS.items():
        for symbol in dimension.usual:
            unit = find_unit(symbol, (name,))
            assert unit is not None, symbol
            assert unit.dimension == name
        assert dimension.noun.startswith(("a ", "an "))
        if dimension.base:
            base = find_unit("" if name == "number" else dimension.base, (name,))
            assert base is not None, name
            assert (base.factor, base.offset, base.base) == (1.0, 0.0, dimension.base)
    assert set(DIMENSIONS) >= DECIBEL_DIMENSIONS


def test_currencies_are_codes_of_three_letters_and_no_other_units() -> None:
    assert {"EUR", "USD", "GBP", "JPY"} <= CURRENCIES
    for code in CURRENCIES:
        unit = find_unit(code)
        assert unit is not None
        assert (len(code), code.isupper(), unit.dimension) == (3, True, "price")


def test_power_of_ten_and_factor_say_the_same() -> None:
    for prefix, power in PREFIXES.items():
        unit = find_unit(prefix + "Hz")
        assert unit is not None
        assert unit.power == power
        assert unit.factor == float(f"1e{power}")
