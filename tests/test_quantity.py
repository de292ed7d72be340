"""Quantities as text: the notations of uncertainty, the faults, the way back.

The clauses and examples of JCGM 100:2008 are quoted from memory; their printed numbers agree with the arithmetic.
"""

from __future__ import annotations

from math import isfinite, isnan, nan, sqrt

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logbook.quantity import (
    Quantity,
    QuantityError,
    key_frequency,
    level_dbm,
    read_quantity,
    read_repeated,
    show_delta,
    show_frequency,
    show_value,
)
from logbook.units import DIMENSIONS


def error_of(text: str, dimension: str | tuple[str, ...], what: str = "") -> QuantityError:
    with pytest.raises(QuantityError) as caught:
        read_quantity(text, dimension, what)
    return caught.value


# --- the number and its unit ---------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "dimension", "value", "unit"),
    [
        ("-96 dBm", "level", -96.0, "dBm"),
        ("10 dBW", "level", 40.0, "dBm"),
        ("21.4 MHz", "frequency", 21.4e6, "Hz"),
        ("4.35 MHz", "frequency", 4_350_000.0, "Hz"),
        ("2.4e9 Hz", "frequency", 2.4e9, "Hz"),
        ("1E3Hz", "frequency", 1e3, "Hz"),
        ("12 uV", "voltage", 12e-6, "V"),
        ("12 uV rms", "voltage", 12e-6, "V"),
        ("1.5 nV/rtHz", "voltage_density", 1.5e-9, "V/rtHz"),
        ("-168 dBm/Hz", "density", -168.0, "dBm/Hz"),
        ("14 degC/W", "thermal_resistance", 14.0, "K/W"),
        ("-3dB", "ratio", -3.0, "dB"),
        ("+3 dB", "ratio", 3.0, "dB"),
        (".5 dB", "ratio", 0.5, "dB"),
        ("\u22123 dB", "ratio", -3.0, "dB"),
        ("\u20133 dB", "ratio", -3.0, "dB"),
        ("  7\u00a0dB ", "ratio", 7.0, "dB"),
        ("290 K", "noise_temperature", 290.0, "K"),
        ("17 degC", "noise_temperature", 290.15, "K"),
        ("290 K", "temperature", 16.85, "degC"),
        ("25 \u00b0C", "temperature", 25.0, "degC"),
        ("20 degC", "temperature_difference", 20.0, "K"),
        ("1.5 min", "time", 90.0, "s"),
        ("1.0645", "number", 1.0645, "1"),
        ("12 %", "number", 0.12, "1"),
        ("50 ppm", "number", 50e-6, "1"),
        ("0.40 EUR", "price", 0.40, "EUR"),
        ("1e-320 V", "voltage", 1e-320, "V"),
    ],
)
def test_value_in_the_base_unit(text: str, dimension: str, value: float, unit: str) -> None:
    quantity = read_quantity(text, dimension)
    assert quantity == Quantity(value, unit, dimension, None, text.strip())


def test_any_of_several_dimensions() -> None:
    wanted = ("level", "voltage_level", "power", "voltage")
    found = [read_quantity(text, wanted).dimension for text in ("3 dBm", "60 dBuV", "25 W", "2 mV")]
    assert found == ["level", "voltage_level", "power", "voltage"]
    assert error_of("3 dB", wanted, "drive").message == (
        "'3 dB' is a ratio; a drive is a level or a voltage level or a power or a voltage, such as '-30 dBm'."
    )


# --- uncertainty ---------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "dimension", "value", "u"),
    [
        # JCGM 100:2008 7.2.2, the example of a mass of 100,021 47 g with u = 0,35 mg, in volts here (grams are no unit
        # of this table): form 2) and form 3) of that clause.
        ("100.02147(35) V", "voltage", 100.02147, 0.00035),
        ("100.02147(0.00035) V", "voltage", 100.02147, 0.00035),
        # 7.2.4: the expanded form of the same example, U = 0,000 79 with k = 2,26
        ("(100.02147 \u00b1 0.00079) V (k=2.26)", "voltage", 100.02147, 0.00035),
        # LOGBOOK's own examples
        ("-96.4(3) dBm", "level", -96.4, 0.3),
        ("-96.40(12) dBm", "level", -96.4, 0.12),
        ("50.1(2) MHz", "frequency", 50.1e6, 0.2e6),
        ("96(3) dB", "ratio", 96.0, 3.0),
        ("2.40(5)e9 Hz", "frequency", 2.4e9, 0.05e9),
        ("-96.4 \u00b1 0.6 dBm (k=2)", "level", -96.4, 0.3),
        ("-96.4 +/- 0.6 dBm (k = 2.0)", "level", -96.4, 0.3),
        ("18 \u00b1 0.5 dB", "ratio", 18.0, 0.5 / sqrt(3)),
        ("18\u00b10.5dB", "ratio", 18.0, 0.5 / sqrt(3)),
        ("18 dB \u00b1 0.5 dB", "ratio", 18.0, 0.5 / sqrt(3)),
        ("18 dB \u00b1 0.5", "ratio", 18.0, 0.5 / sqrt(3)),
        ("\u00b1 1.5 dB", "ratio", 0.0, 1.5 / sqrt(3)),
        ("\u00b1 1.5 dB (k=2)", "ratio", 0.0, 0.75),
        ("10 dBW \u00b1 0.5 dB", "level", 40.0, 0.5 / sqrt(3)),
        ("10(1) dBW", "level", 40.0, 1.0),
        ("290 \u00b1 3 K", "temperature", 16.85, sqrt(3)),
        ("25 degC \u00b1 3 K", "temperature", 25.0, sqrt(3)),
        ("10 V \u00b1 2 %", "voltage", 10.0, 0.2 / sqrt(3)),
        ("-10 V \u00b1 2 % (k=2)", "voltage", -10.0, 0.1),
        ("10 MHz \u00b1 50 ppm", "frequency", 10e6, 500 / sqrt(3)),
        ("10 MHz \u00b1 50 kHz", "frequency", 10e6, 50e3 / sqrt(3)),
        ("(5 \u00b1 2) %", "number", 0.05, 0.02 / sqrt(3)),
    ],
)
def test_standard_uncertainty(text: str, dimension: str, value: float, u: float) -> None:
    quantity = read_quantity(text, dimension)
    assert quantity.value == pytest.approx(value, rel=1e-12)
    # 0.00079 / 2.26 is the standard uncertainty at its two printed digits only
    assert quantity.u == pytest.approx(u, rel=2e-3 if "2.26" in text else 1e-12)


def test_rectangular_limits_as_in_the_guide() -> None:
    # JCGM 100:2008 4.3.7: the coefficient of expansion of copper lies within 16.52e-6 +- 0.40e-6 per degC: u = 0.23e-6
    assert read_quantity("16.52e-6 \u00b1 0.40e-6", "number").u == pytest.approx(0.23e-6, abs=0.005e-6)


def test_expanded_uncertainty_as_in_the_guide() -> None:
    # JCGM 100:2008 4.3.3: a mass standard, 240 micrograms at three standard deviations: u = 80; microvolts here
    assert read_quantity("1000.000325 V \u00b1 240 uV (k=3)", "voltage").u == pytest.approx(80e-6, rel=1e-12)


def test_not_stated_is_not_zero() -> None:
    assert read_quantity("18 dB", "ratio").u is None


@pytest.mark.parametrize(
    ("text", "why"),
    [
        ("18 \u00b1 -0.5 dB", "is negative"),
        ("18 \u00b1 0 dB", "is zero"),
        ("18(0) dB", "is zero"),
        ("18 \u00b1 1e999 dB", "is no finite number"),
        ("18 \u00b1 0.5 dB (k=0)", "has a coverage factor of zero"),
        ("18 \u00b1 2 %", "can be meant in two ways"),
        ("18 dB \u00b1 2 %", "is a part of the value, which means nothing in dB"),
        ("18 dB \u00b1 3 V", "has the unit 'V', which does not fit the value's"),
        ("18 \u00b1 x dB", "cannot be read"),
        ("18(a) dB", "cannot be read"),
        ("18.0(2) \u00b1 0.3 dB", "cannot be read"),
    ],
)
def test_unusable_uncertainty(text: str, why: str) -> None:
    error = error_of(text, ("ratio", "number"))
    assert (error.code, error.message) == ("uncertainty", f"The uncertainty in '{text}' {why}.")
    assert error.hint


# --- repeated readings ---------------------------------------------------------------------------


def test_mean_and_its_uncertainty() -> None:
    # JCGM 100:2008 4.2.1, 4.2.3: s = 0.1, u = s / sqrt(3): closed form
    quantity = read_repeated(["41.8 dB", "41.9 dB", "41.7 dB"], "ratio")
    assert quantity.value == pytest.approx(41.8, rel=1e-12)
    assert quantity.u == pytest.approx(0.1 / sqrt(3), rel=1e-9)
    assert quantity.repeats == (41.8, 41.9, 41.7)
    assert quantity.written == "[41.8 dB, 41.9 dB, 41.7 dB]"


def test_mean_of_twenty_temperatures() -> None:
    # JCGM 100:2008 4.4.3, table 1: mean 100.145, s = 1.489, u of the mean 0.333 (printed 100,14; 1,49; 0,33)
    readings = (
        "96.90 98.18 98.25 98.61 99.03 99.49 99.56 99.74 99.89 100.07 "
        "100.33 100.42 100.68 100.95 101.11 101.20 101.57 101.84 102.36 102.72"
    )
    quantity = read_repeated([f"{reading} degC" for reading in readings.split()], "temperature")
    assert quantity.value == pytest.approx(100.145, abs=0.0005)
    assert quantity.u == pytest.approx(0.333, abs=0.0005)


def test_equal_readings_are_known_to_their_last_digit() -> None:
    # JCGM 100:2008 F.2.2.1: u = 0.29 of the resolution
    assert read_repeated(["42.1 dB", "42.1 dB"], "ratio").u == pytest.approx(0.029, abs=0.0005)
    assert read_repeated(["1.25 MHz", "1.25 MHz"], "frequency").u == pytest.approx(2.9e3, abs=50)


def test_a_single_reading_is_no_repetition() -> None:
    assert read_repeated(["42.1(3) dB"], "ratio") == read_quantity("42.1(3) dB", "ratio")


@pytest.mark.parametrize(
    ("texts", "code"),
    [
        ([], "number"),
        (["1 dB", "2 dBm"], "dimension"),
        (["1(1) dB", "2 dB"], "uncertainty"),
        (["1 dB", "two dB"], "number"),
        (["1 EUR", "2 USD"], "dimension"),
        (["1e300 V", "-1e300 V"], "not-finite"),
    ],
)
def test_readings_that_do_not_go_together(texts: list[str], code: str) -> None:
    wanted = ("ratio", "level", "voltage") if "EUR" not in "".join(texts) else "price"
    with pytest.raises(QuantityError) as caught:
        read_repeated(texts, wanted if code != "dimension" or "EUR" in "".join(texts) else ("ratio", "level"))
    assert caught.value.code == code


# --- faults --------------------------------------------------------------------------------------


def test_wrong_dimension_in_the_words_of_the_house() -> None:
    error = error_of("12 dBm", "ratio", "gain")
    assert error.message == "'12 dBm' is a level; a gain is a ratio, such as '12 dB'."
    assert (error.code, error.offset) == ("dimension", 3)
    assert error_of("12 dBm", "ratio").message == "'12 dBm' is a level; here a ratio is expected, such as '12 dB'."
    assert error_of("12 dBm", "ratio", "nf").message == "'12 dBm' is a level; an nf is a ratio, such as '12 dB'."
    assert error_of("3 W", "level", "iip3").message == "'3 W' is a power; an iip3 is a level, such as '-30 dBm'."


@pytest.mark.parametrize(
    ("text", "dimension", "code", "offset", "hint"),
    [
        ("12", "ratio", "no-unit", 2, "Units here: dB."),
        ("12 mhz", "frequency", "unknown-unit", 3, "Did you mean 'MHz'?"),
        ("12 MHz", "ratio", "dimension", 3, ""),
        ("12 mW", "level", "dimension", 3, ""),
        ("4 dB", "number", "dimension", 2, ""),
        ("41,8 dB", "ratio", "decimal-comma", 2, "Write '41.8 dB'."),
        ("-41,8(3) dB", "ratio", "decimal-comma", 3, "Write '-41.8(3) dB'."),
        ("1,000 Hz", "frequency", "decimal-comma", 1, "Write '1.000 Hz', or '1000 Hz' if thousands were meant."),
        ("1,234.5 Hz", "frequency", "decimal-comma", 1, "Write '1234.5 Hz'."),
        ("18 \u00b1 0,5 dB", "ratio", "decimal-comma", 6, "Write '18 \u00b1 0.5 dB'."),
        ("nan", "ratio", "not-finite", 0, "Leave"),
        ("-inf dB", "ratio", "not-finite", 0, "Leave"),
        ("Infinity", "number", "not-finite", 0, "Leave"),
        (".nan", "number", "not-finite", 0, "Leave"),
        ("1e400 Hz", "frequency", "not-finite", 0, "Leave"),
        ("1e999999999999 Hz", "frequency", "not-finite", 0, "Leave"),
        ("9e307 kHz", "frequency", "not-finite", 0, "Leave"),
        ("1_000 Hz", "frequency", "number", 0, "Write '1000 Hz'."),
        ("100 000 Hz", "frequency", "number", 0, "Write '100000 Hz'."),
        ("high", "ratio", "number", 0, ""),
        ("  dB 3", "ratio", "number", 2, ""),
        ("", "ratio", "number", 0, ""),
        ("3 dB or so", "ratio", "trailing-text", 2, "One number"),
        ("3 dB 4 dB", "ratio", "trailing-text", 2, "One number"),
        ("\u0663 dB", "ratio", "number", 0, ""),
        ("-300 degC", "temperature", "number", 0, ""),
        ("-1 K", "noise_temperature", "number", 0, ""),
        ("0x10 Hz", "frequency", "trailing-text", 1, "One number"),
    ],
)
def test_fault(text: str, dimension: str, code: str, offset: int, hint: str) -> None:
    error = error_of(text, dimension)
    assert (error.code, error.offset) == (code, offset)
    assert error.hint.startswith(hint)
    assert error.message.endswith(".")


@given(st.text(max_size=30), st.sampled_from(sorted(DIMENSIONS)))
def test_any_text_is_a_quantity_or_a_quantity_error(text: str, dimension: str) -> None:
    check_anything(text, dimension)


PARTS = ["12", "-3.4", "1e9", "e", ".", ",", " ", "\u00b1", "+/-", "(", ")", "(3)", "(k=2)", "(k=0)", "%", "dB", "dBm"]
PARTS += ["MHz", "K", "degC", "V", "1e999", "nan", "-", "\u2212", "0", "rms", "EUR", "\n", "\x00", "\u00b5"]


@given(st.lists(st.sampled_from(PARTS), max_size=8), st.sampled_from(sorted(DIMENSIONS)))
def test_any_pieces_of_quantities_too(parts: list[str], dimension: str) -> None:
    check_anything("".join(parts), dimension)


def read_or_error(text: str, dimension: str) -> Quantity | QuantityError:
    try:
        return read_quantity(text, dimension, "gain")
    except QuantityError as error:
        return error


def check_anything(text: str, dimension: str) -> None:
    quantity = read_or_error(text, dimension)
    if isinstance(quantity, QuantityError):
        assert 0 <= quantity.offset <= len(text)
        assert quantity.code
        assert quantity.message
        return
    assert isfinite(quantity.value)
    assert quantity.u is None or (isfinite(quantity.u) and quantity.u > 0)
    assert quantity.dimension == dimension


# --- levels --------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("text", "impedance", "dbm"),
    [
        ("-30 dBm", 50.0, -30.0),
        ("1 mW", 50.0, 0.0),
        ("1 W", 75.0, 30.0),
        # 0 dBm in 50 ohm is 223.6 mV, and 107.0 dBuV: common practice
        ("223.6 mV", 50.0, 0.0),
        ("106.99 dBuV", 50.0, 0.0),
        # and 108.75 dBuV in 75 ohm: common practice
        ("108.75 dBuV", 75.0, 0.0),
    ],
)
def test_level_at_an_impedance(text: str, impedance: float, dbm: float) -> None:
    quantity = read_quantity(text, ("level", "voltage_level", "power", "voltage"))
    assert level_dbm(quantity, impedance)[0] == pytest.approx(dbm, abs=0.005)


def test_level_carries_its_uncertainty() -> None:
    wanted = ("level", "voltage_level", "power", "voltage")
    # 1 % of a power is 0.0434 dB, 1 % of a voltage 0.0869 dB: closed form
    assert level_dbm(read_quantity("2.00(2) W", wanted), 50.0)[1] == pytest.approx(0.0434, abs=5e-5)
    assert level_dbm(read_quantity("2.00(2) mV", wanted), 50.0)[1] == pytest.approx(0.0869, abs=5e-5)
    assert level_dbm(read_quantity("60.0(5) dBuV", wanted), 50.0)[1] == 0.5
    assert level_dbm(read_quantity("2 mV", wanted), 50.0)[1] is None


@pytest.mark.parametrize("text", ["0 W", "-1 V", "0 V"])
def test_what_is_not_positive_has_no_level(text: str) -> None:
    value, u = level_dbm(read_quantity(text, ("power", "voltage")), 50.0)
    assert isnan(value)
    assert u is None


def test_no_level_without_an_impedance_or_of_a_ratio() -> None:
    assert isnan(level_dbm(read_quantity("1 V", "voltage"), 0.0)[0])
    with pytest.raises(ValueError, match="ratio"):
        level_dbm(read_quantity("1 dB", "ratio"), 50.0)


# --- the way back --------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("value", "unit", "u", "shown"),
    [
        # JCGM 100:2008 7.2.6: at most two significant digits of u, and the value to the same digit; its example
        # 10.05762 ohm with u = 27 milliohm
        (10.05762, "ohm", 0.027, "10.058 \u00b1 0.027 \u03a9"),
        (-118.4, "dBm", 0.3, "-118.40 \u00b1 0.30 dBm"),
        (-118.4, "dBm", 12.3, "-118 \u00b1 12 dBm"),
        (3.0, "dB", 0.996, "3.0 \u00b1 1.0 dB"),
        (3.0, "dB", 0.0, "3.00 \u00b1 0 dB"),
        (50.1e6, "Hz", 12e3, "50.100 \u00b1 0.012 MHz"),
        (1e-6, "V", 5e-3, "0.0 \u00b1 5.0 mV"),
        (12346.0, "1", 1200.0, "12300 \u00b1 1200"),
        (-118.4, "dBm", None, "-118.40 dBm"),
        (-0.001, "dB", None, "0.00 dB"),
        (50.123456e6, "Hz", None, "50.12346 MHz"),
        (999_999.96, "Hz", None, "1 MHz"),
        (1.5e-9, "V/rtHz", None, "1.5 nV/\u221aHz"),
        (12.5, "EUR", None, "12.50 EUR"),
        (25.312, "degC", None, "25.31 \u00b0C"),
        (0.0, "V", None, "0 V"),
        (1e20, "Hz", None, "1e+08 THz"),
        (nan, "dB", None, "not known"),
        (None, "dB", 0.1, "not known"),
        (1.0, "dB", nan, "1.00 dB"),
    ],
)
def test_shown(value: float | None, unit: str, u: float | None, shown: str) -> None:
    assert show_value(value, unit, u) == shown


@pytest.mark.parametrize(
    ("value", "unit", "u", "shown"),
    [
        (0.3, "dB", 0.14, "+0.30 \u00b1 0.14 dB"),
        (-0.3, "dB", None, "-0.30 dB"),
        (0.0, "dB", None, "0.00 dB"),
        (1200.0, "Hz", None, "+1.2 kHz"),
        (nan, "dB", None, "not known"),
    ],
)
def test_difference_shown_with_its_sign(value: float, unit: str, u: float | None, shown: str) -> None:
    assert show_delta(value, unit, u) == shown


@pytest.mark.parametrize(
    ("hz", "shown"),
    [
        (50.1e6, "50.1 MHz"),
        (1_234_567.0, "1.234567 MHz"),
        (144.3e6 - 116e6, "28.3 MHz"),
        (28.3e6 + 4e-9, "28.3 MHz"),
        (10e3, "10 kHz"),
        (0.0, "0 Hz"),
        (0.5, "0.5 Hz"),
        (-200e3, "-200 kHz"),
        (nan, "not known"),
    ],
)
def test_frequency_shown_short_and_exact(hz: float, shown: str) -> None:
    assert show_frequency(hz) == shown
    if hz == hz:
        assert key_frequency(hz) == shown.replace(" ", "")


@given(st.integers(min_value=1, max_value=10**11), st.integers(min_value=0, max_value=2))
def test_frequency_comes_back_exactly(number: int, decimals: int) -> None:
    hz = number / 10**decimals
    assert read_quantity(show_frequency(hz), "frequency").value == hz


SHOWN_UNITS = ["dB", "dBm", "dBc/Hz", "Hz", "V", "A", "ohm", "V/rtHz", "degC", "K/W", "V/dB", "1", "EUR", "dBuV"]
FINITE = st.floats(min_value=-1e9, max_value=1e9, allow_nan=False)
UNCERTAINTY = st.floats(min_value=1e-6, max_value=1e3)


@given(FINITE, st.sampled_from(SHOWN_UNITS), UNCERTAINTY)
def test_what_is_shown_with_its_doubt_is_read_back_within_it(value: float, unit: str, u: float) -> None:
    shown = show_value(value, unit, u)
    if value < -200 and unit == "degC":
        return
    dimension = next(name for name, d in DIMENSIONS.items() if unit in (d.base, *d.usual))
    number, _, symbol = shown.rpartition(" ") if unit != "1" else (shown, "", "")
    quantity = read_quantity(f"({number}) {symbol} (k=1)", dimension)
    # The last digit shown is worth a tenth of u at most; half of it may be rounded away.
    assert quantity.u == pytest.approx(u, rel=0.06)
    assert abs(quantity.value - value) <= 0.06 * u + 1e-9 * abs(value)
