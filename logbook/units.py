"""The closed table of units: what may stand behind a number, what it measures, and how it becomes the base unit.

SI prefixes are case sensitive. `u`, U+00B5 and U+03BC all mean micro; `ohm`, `Ohm`, U+03A9 and U+2126 are one unit.
A text such as `K` stands in the table once for each dimension it can have.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit as written; in the base unit a number is `number * factor + offset`.

    `power` is the factor as a power of ten, None where it is no such power: with it a number's digits become the base
    unit without a second rounding.
    """

    symbol: str
    dimension: str
    factor: float
    offset: float = 0.0
    base: str = ""
    power: int | None = 0


@dataclass(frozen=True, slots=True)
class Dimension:
    """What a number measures: `noun` carries its article; `usual` are the units named in a hint."""

    name: str
    base: str
    noun: str
    example: str
    usual: tuple[str, ...]


def _dimensions() -> dict[str, Dimension]:
    rows = (
        ("ratio", "dB", "a ratio", "12 dB", "dB"),
        ("level", "dBm", "a level", "-30 dBm", "dBm dBW"),
        ("voltage_level", "dBuV", "a voltage level", "34 dBuV", "dBuV dBmV dBV"),
        ("relative", "dBc", "a level relative to a carrier", "-60 dBc", "dBc"),
        ("density", "dBm/Hz", "a noise density", "-168 dBm/Hz", "dBm/Hz"),
        ("relative_density", "dBc/Hz", "a noise density relative to a carrier", "-120 dBc/Hz", "dBc/Hz"),
        ("frequency", "Hz", "a frequency", "50.1 MHz", "Hz kHz MHz GHz"),
        ("voltage", "V", "a voltage", "12 mV", "V mV uV nV"),
        ("current", "A", "a current", "25 mA", "A mA uA nA pA"),
        ("power", "W", "a power", "250 mW", "W mW uW kW"),
        ("resistance", "ohm", "a resistance", "50 ohm", "ohm kohm Mohm mohm"),
        ("voltage_density", "V/rtHz", "a noise voltage density", "1.5 nV/rtHz", "nV/rtHz uV/rtHz V/rtHz"),
        ("current_density", "A/rtHz", "a noise current density", "2 pA/rtHz", "pA/rtHz fA/rtHz nA/rtHz"),
        ("temperature", "degC", "a temperature", "25 degC", "degC K"),
        ("noise_temperature", "K", "a noise temperature", "290 K", "K degC"),
        ("temperature_difference", "K", "a temperature difference", "20 K", "K"),
        ("thermal_resistance", "K/W", "a thermal resistance", "14 degC/W", "degC/W K/W"),
        ("time", "s", "a time", "20 ms", "s ms us"),
        ("number", "1", "a plain number", "1.5", "%"),
        ("slope", "V/dB", "a slope in volts per decibel", "25 mV/dB", "V/dB mV/dB"),
        ("gain_slope", "dB/V", "a slope in decibels per volt", "20 dB/V", "dB/V dB/mV"),
        ("price", "", "a price", "12.50 EUR", "EUR USD GBP CHF"),
        ("capacitance", "F", "a capacitance", "100 pF", "pF nF uF"),
        ("inductance", "H", "an inductance", "220 nH", "nH uH mH"),
        ("length", "m", "a length", "1.5 m", "m mm cm"),
        ("pushing", "Hz/V", "a change of frequency per volt", "20 kHz/V", "Hz/V kHz/V MHz/V"),
        ("divisions", "div", "a number of divisions", "3.2 div", "div"),
        ("voltage_ratio", "V/V", "a ratio of voltages", "0.5 V/V", "V/V mV/V uV/V"),
    )
    return {
        name: Dimension(name, base, noun, example, tuple(usual.split())) for name, base, noun, example, usual in rows
    }


DIMENSIONS = _dimensions()

# Numbers of these are logarithms: a part of such a number, or a prefix before it, means nothing.
DECIBEL_DIMENSIONS = frozenset({"ratio", "level", "voltage_level", "relative", "density", "relative_density"})

PREFIXES = {"f": -15, "p": -12, "n": -9, "u": -6, "m": -3, "": 0, "k": 3, "M": 6, "G": 9, "T": 12}

ABSOLUTE_ZERO_C = -273.15

# ISO 4217, the codes of currencies in use.
_CODES = """
    AED AFN ALL AMD AOA ARS AUD AWG AZN BAM BBD BDT BGN BHD BIF BMD BND BOB BRL BSD BTN BWP BYN BZD CAD CDF CHF CLP
    CNY COP CRC CUP CVE CZK DJF DKK DOP DZD EGP ERN ETB EUR FJD FKP GBP GEL GHS GIP GMD GNF GTQ GYD HKD HNL HTG HUF IDR
    ILS INR IQD IRR ISK JMD JOD JPY KES KGS KHR KMF KPW KRW KWD KYD KZT LAK LBP LKR LRD LSL LYD MAD MDL MGA MKD MMK MNT
    MOP MRU MUR MVR MWK MXN MYR MZN NAD NGN NIO NOK NPR NZD OMR PAB PEN PGK PHP PKR PLN PYG QAR RON RSD RUB RWF SAR SBD
    SCR SDG SEK SGD SHP SLE SOS SRD SSP STN SVC SYP SZL THB TJS TMT TND TOP TRY TTD TWD TZS UAH UGX USD UYU UZS VES VND
    VUV WST XAF XCD XOF XPF YER ZAR ZMW ZWG
"""
CURRENCIES = frozenset(_CODES.split())

# dimension: the ways to write its base unit that take SI prefixes
_PREFIXED = {
    "frequency": "Hz",
    "voltage": "V Vrms",
    "current": "A Arms",
    "power": "W",
    "resistance": "ohm Ohm \u03a9 \u2126",
    "voltage_density": "V/rtHz V/\u221aHz V/sqrtHz V/sqrt(Hz)",
    "current_density": "A/rtHz A/\u221aHz A/sqrtHz A/sqrt(Hz)",
    "time": "s",
    "slope": "V/dB",
    "capacitance": "F",
    "inductance": "H",
    "length": "m",
    "pushing": "Hz/V",
    "voltage_ratio": "V/V Vrms/V",
}

_CELSIUS = ("degC", "\u00b0C", "\u2103")


def _prefixed() -> list[Unit]:
    found = []
    for dimension, symbols in _PREFIXED.items():
        base = DIMENSIONS[dimension].base
        for prefix, power in PREFIXES.items():
            for symbol in symbols.split():
                for written in ("u", "\u00b5", "\u03bc") if prefix == "u" else (prefix,):
                    found.append(Unit(written + symbol, dimension, float(f"1e{power}"), 0.0, base, power))
    return found


def _decibels() -> list[Unit]:
    rows = [("dB", "ratio", 0.0), ("dBm", "level", 0.0), ("dBW", "level", 30.0), ("dBc", "relative", 0.0)]
    rows += [("dBm/Hz", "density", 0.0), ("dBW/Hz", "density", 30.0), ("dBc/Hz", "relative_density", 0.0)]
    rows += [(f"dB{micro}V", "voltage_level", 0.0) for micro in ("u", "\u00b5", "\u03bc")]
    rows += [("dBmV", "voltage_level", 60.0), ("dBV", "voltage_level", 120.0)]
    return [Unit(symbol, name, 1.0, offset, DIMENSIONS[name].base) for symbol, name, offset in rows]


def _temperatures() -> list[Unit]:
    found = [
        Unit("K", "temperature", 1.0, ABSOLUTE_ZERO_C, "degC"),
        Unit("K", "noise_temperature", 1.0, 0.0, "K"),
        Unit("K", "temperature_difference", 1.0, 0.0, "K"),
        Unit("K/W", "thermal_resistance", 1.0, 0.0, "K/W"),
    ]
    for celsius in _CELSIUS:
        found.append(Unit(celsius, "temperature", 1.0, 0.0, "degC"))
        found.append(Unit(celsius, "noise_temperature", 1.0, -ABSOLUTE_ZERO_C, "K"))
        found.append(Unit(celsius, "temperature_difference", 1.0, 0.0, "K"))
        found.append(Unit(celsius + "/W", "thermal_resistance", 1.0, 0.0, "K/W"))
    return found


def _others() -> list[Unit]:
    found = [
        Unit("", "number", 1.0, 0.0, "1"),
        Unit("%", "number", 0.01, 0.0, "1", -2),
        Unit("ppm", "number", 1e-6, 0.0, "1", -6),
        Unit("ppb", "number", 1e-9, 0.0, "1", -9),
        Unit("dB/V", "gain_slope", 1.0, 0.0, "dB/V"),
        Unit("dB/mV", "gain_slope", 1e3, 0.0, "dB/V", 3),
        Unit("cm", "length", 0.01, 0.0, "m", -2),
        Unit("div", "divisions", 1.0, 0.0, "div"),
        Unit("min", "time", 60.0, 0.0, "s", None),
        Unit("h", "time", 3600.0, 0.0, "s", None),
    ]
    return found + [Unit(code, "price", 1.0, 0.0, code) for code in sorted(CURRENCIES)]


def _table() -> dict[str, dict[str, Unit]]:
    table: dict[str, dict[str, Unit]] = {}
    for unit in _decibels() + _prefixed() + _temperatures() + _others():
        table.setdefault(unit.symbol, {})[unit.dimension] = unit
    return table


# symbol -> dimension -> unit
_UNITS = _table()

# What people write for a unit when they spell it out or shorten it in another way.
_WORDS = {
    "hertz": "Hz",
    "cps": "Hz",
    "volt": "V",
    "volts": "V",
    "ampere": "A",
    "amp": "A",
    "amps": "A",
    "watt": "W",
    "watts": "W",
    "ohms": "ohm",
    "kelvin": "K",
    "degk": "K",
    "celsius": "degC",
    "c": "degC",
    "deg": "degC",
    "sec": "s",
    "seconds": "s",
    "percent": "%",
    "euro": "EUR",
    "euros": "EUR",
    "\u20ac": "EUR",
    "$": "USD",
    "\u00a3": "GBP",
    "decibel": "dB",
    "decibels": "dB",
    "k/w": "K/W",
    "c/w": "degC/W",
}


def find_unit(text: str, wanted: tuple[str, ...] = ()) -> Unit | None:
    """The unit of this text, in the first of the `wanted` dimensions it can have, else in any it can have."""
    known = _UNITS.get(text)
    if known is None:
        return None
    for dimension in wanted:
        if dimension in known:
            return known[dimension]
    return next(iter(known.values()))


def likely_unit(text: str, wanted: tuple[str, ...]) -> str:
    """The unit that was probably meant by an unknown text, of the wanted dimensions; empty when none is likely."""
    lowered = text.lower()
    usual = [symbol for name in wanted for symbol in DIMENSIONS[name].usual]
    rest = [symbol for symbol, by_dimension in _UNITS.items() if any(name in by_dimension for name in wanted)]
    for symbol in usual + rest:
        if symbol.lower() == lowered:
            return symbol
    word = _WORDS.get(lowered, "")
    return word if word in usual or word in rest else ""
