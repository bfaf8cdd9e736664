"""Units: text with a unit to SI floats, and back. The only place that knows them.

The table is closed. A spelling that could mean two things (``ton``, ``gal/min``, ``C``, ``hp``) is not in it;
the error then names the spellings that may be meant.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from difflib import get_close_matches
from functools import cache
from typing import Final

ECHO_LENGTH: Final = 40


class UnitError(ValueError):
    """A text that is not a quantity of the dimension asked for; the message says what is."""


@dataclass(frozen=True)
class Unit:
    """One accepted spelling: ``SI value = number * factor + offset``."""

    text: str
    dimension: str
    factor: float
    offset: float = 0.0


_INCH = 0.0254
_FOOT = 0.3048
_POUND = 0.45359237
_POUND_FORCE = _POUND * 9.80665
_GALLON = 231 * _INCH**3
_HOUR = 3600.0
_DAY = 86400.0
_TURN = 2 * math.pi

# The first spellings of a dimension are the ones an error offers.
_FACTORS: Final[dict[str, dict[str, float]]] = {
    "length": {"m": 1.0, "mm": 1e-3, "cm": 1e-2, "in": _INCH, "ft": _FOOT, "µm": 1e-6, "um": 1e-6,
               "km": 1e3},
    "pressure": {
        "kPa": 1e3, "bar": 1e5, "MPa": 1e6, "psi": _POUND_FORCE / _INCH**2, "Pa": 1.0, "hPa": 1e2,
        "mbar": 1e2, "N/m2": 1.0,
    },
    "stress": {
        "Pa": 1.0, "mPa": 1e-3, "kPa": 1e3, "lbf/ft2": _POUND_FORCE / _FOOT**2, "dyn/cm2": 0.1,
        "lbf/100ft2": _POUND_FORCE / _FOOT**2 / 100, "N/m2": 1.0, "psi": _POUND_FORCE / _INCH**2,
    },
    "viscosity": {
        "Pa.s": 1.0, "mPa.s": 1e-3, "cP": 1e-3, "P": 0.1, "lbf.s/ft2": _POUND_FORCE / _FOOT**2, "Pa s": 1.0,
        "mPa s": 1e-3, "µPa.s": 1e-6, "uPa.s": 1e-6, "kPa.s": 1e3, "kg/(m.s)": 1.0,
    },
    "consistency": {
        "Pa.s^n": 1.0, "mPa.s^n": 1e-3, "lbf.s^n/ft2": _POUND_FORCE / _FOOT**2, "dyn.s^n/cm2": 0.1,
        "Pa s^n": 1.0, "mPa s^n": 1e-3, "kPa.s^n": 1e3,
        "lbf.s^n/100ft2": _POUND_FORCE / _FOOT**2 / 100,
    },
    "density": {
        "kg/m3": 1.0, "t/m3": 1e3, "g/cm3": 1e3, "kg/L": 1e3, "lb/ft3": _POUND / _FOOT**3, "kg/dm3": 1e3,
        "g/mL": 1e3, "g/L": 1.0,
    },
    "volume flow": {
        "m3/h": 1 / _HOUR, "m3/s": 1.0, "L/s": 1e-3, "L/min": 1e-3 / 60, "US gpm": _GALLON / 60,
        "ft3/s": _FOOT**3, "gpm": _GALLON / 60, "ft3/min": _FOOT**3 / 60, "m3/min": 1 / 60, "m3/d": 1 / _DAY,
        "L/h": 1e-3 / _HOUR, "mL/s": 1e-6, "mL/min": 1e-6 / 60, "ft3/h": _FOOT**3 / _HOUR,
    },
    "mass flow": {
        "kg/h": 1 / _HOUR, "t/h": 1e3 / _HOUR, "kg/s": 1.0, "lb/h": _POUND / _HOUR, "kg/min": 1 / 60,
        "g/s": 1e-3, "t/d": 1e3 / _DAY, "lb/s": _POUND, "lb/min": _POUND / 60,
    },
    "velocity": {
        "m/s": 1.0, "ft/s": _FOOT, "mm/s": 1e-3, "cm/s": 1e-2, "m/min": 1 / 60, "ft/min": _FOOT / 60,
    },
    "shear rate": {"1/s": 1.0, "s^-1": 1.0, "s-1": 1.0, "/s": 1.0},
    "rotational speed": {"rpm": _TURN / 60, "rad/s": 1.0, "r/min": _TURN / 60, "rev/min": _TURN / 60},
    "temperature": {"K": 1.0},
    "temperature difference": {"K": 1.0},
    "specific heat": {"kJ/(kg.K)": 1e3, "J/(kg.K)": 1.0},
    "molar energy": {"kJ/mol": 1e3, "J/mol": 1.0, "kcal/mol": 4184.0},
    "time": {"s": 1.0, "min": 60.0, "h": _HOUR, "d": _DAY},
    "power": {"kW": 1e3, "W": 1.0, "MW": 1e6},
    "torque": {
        "N.m": 1.0, "mN.m": 1e-3, "µN.m": 1e-6, "uN.m": 1e-6, "N.cm": 1e-2, "dyn.cm": 1e-7,
        "lbf.ft": _POUND_FORCE * _FOOT, "lbf.in": _POUND_FORCE * _INCH, "ft.lbf": _POUND_FORCE * _FOOT,
        "Nm": 1.0, "mNm": 1e-3,
    },
}  # fmt: skip

_AFFINE: Final = (
    Unit("°C", "temperature", 1.0, 273.15),
    Unit("degC", "temperature", 1.0, 273.15),
    Unit("°F", "temperature", 5 / 9, 459.67 * 5 / 9),
    Unit("degF", "temperature", 5 / 9, 459.67 * 5 / 9),
)

_DISPLAY: Final = {
    "length": "m",
    "pressure": "kPa",
    "absolute pressure": "kPa",
    "stress": "Pa",
    "viscosity": "Pa.s",
    "consistency": "Pa.s^n",
    "density": "kg/m3",
    "volume flow": "m3/h",
    "mass flow": "t/h",
    "velocity": "m/s",
    "shear rate": "1/s",
    "rotational speed": "rpm",
    "temperature": "°C",
    "temperature difference": "K",
    "specific heat": "kJ/(kg.K)",
    "molar energy": "kJ/mol",
    "time": "s",
    "power": "kW",
    "torque": "mN.m",
}

_HINTS: Final = {
    "C": "C is the coulomb; degrees are °C",
    "F": "F is the farad; degrees are °F",
    "mb": "write mbar",
    "psig": "pressures are gauge: write psi",
    "barg": "pressures are gauge: write bar",
    "psia": "pressures are gauge: write psi, less the atmosphere",
    "bara": "pressures are gauge: write bar, less the atmosphere",
    "ton/h": "ton is ambiguous: t/h is 1000 kg/h",
    "tph": "ton is ambiguous: t/h is 1000 kg/h",
    "gal/min": "gallon is ambiguous: US gpm is the US gallon",
    "GPM": "write US gpm, the US gallon",
    "imp gpm": "imperial gallons are not accepted",
    "cfm": "write ft3/min",
    "hp": "horsepower is ambiguous: give kW",
    "cSt": "a kinematic viscosity; give the dynamic one",
    "Hz": "ambiguous: write rpm for a speed, 1/s for a shear rate",
    "1/min": "ambiguous: write rpm",
    '"': "write in",
    "'": "write ft",
}


_ABSOLUTE_HINTS: Final = dict.fromkeys(("psig", "barg"), "an absolute pressure is needed")


def _with_small_litre(units: dict[str, float]) -> dict[str, float]:
    return {**units, **{text.replace("L", "l"): factor for text, factor in units.items() if "L" in text}}


def _absolute(pressure: dict[str, float]) -> dict[str, float]:
    return {**pressure, "kPa(a)": 1e3, "bara": 1e5, "psia": pressure["psi"]}


def _build() -> dict[str, dict[str, Unit]]:
    table = {
        dimension: {text: Unit(text, dimension, factor) for text, factor in _with_small_litre(units).items()}
        for dimension, units in [*_FACTORS.items(), ("absolute pressure", _absolute(_FACTORS["pressure"]))]
    }
    table["temperature"] = {unit.text: unit for unit in _AFFINE} | table["temperature"]
    return table


UNITS: Final[dict[str, dict[str, Unit]]] = _build()
"""Every accepted spelling, by dimension; what errors offer first comes first."""

_BY_TEXT: Final = {unit.text: unit for units in reversed(UNITS.values()) for unit in units.values()}

NUMBER: Final = r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
"""A number as case files and tables write it."""

_QUANTITY: Final = re.compile(rf"({NUMBER})[ ]*(.*)", re.DOTALL)
_RANGE: Final = re.compile(rf"({NUMBER})[ ]*(.*?)[ ]*(?<!\.)\.\.(?!\.)[ ]*({NUMBER})[ ]*(.*)", re.DOTALL)
_DECIMAL_COMMA: Final = re.compile(r"[+-]?(?:0*,[0-9]+|[0-9]+,(?![0-9]{3}(?![0-9]))[0-9]+)(?![0-9.,])")
"""Digits and a comma that cannot be a thousands mark."""
_TYPOGRAPHY: Final = str.maketrans("³²·⋅*μ⁻¹", "32...µ-1")


def parse(text: str, *dimensions: str) -> float:
    """Read a quantity such as ``140 m3/h``, and give its value in SI units.

    Parameters
    ----------
    text : str
        A number and its unit.
    *dimensions : str
        The dimensions that fit, keys of :data:`UNITS`.

    Raises
    ------
    UnitError
        The text is no such quantity.

    Examples
    --------
    >>> parse("36 m3/h", "volume flow")
    0.01
    """
    return parse_with_dimension(text, *dimensions)[0]


def parse_with_dimension(text: str, *dimensions: str) -> tuple[float, str]:
    """Read a quantity like :func:`parse`, and say which of the dimensions its unit is of."""
    match = _QUANTITY.fullmatch(text.strip(" "))
    if match is None:
        raise UnitError(_not_a_quantity(text, dimensions))
    number, written = match.groups()
    unit = _find(text, written, dimensions)
    return _in_si(text, number, unit), unit.dimension


def parse_range(text: str, dimension: str) -> tuple[float, float]:
    """Read a range such as ``5 .. 400 1/s`` or ``8 Pa .. 0.1 kPa``: lower and upper end in SI units, lower < upper.

    Raises
    ------
    UnitError
        The text is no such range.
    """
    ends = split_range(text, f"5 .. 400 {next(iter(UNITS[dimension]))}")
    low, high = (_in_si(text, number, _find(text, unit, (dimension,))) for number, unit in ends)
    if not low < high:
        raise UnitError(f"found {echo(text)}; the lower end comes first and differs from the upper")
    return low, high


def split_range(text: str, example: str) -> tuple[tuple[str, str], tuple[str, str]]:
    """Take a range apart: number and unit of either end; a unit that stands once is that of both.

    Raises
    ------
    UnitError
        The text is no range; the message shows the example.
    """
    match = _RANGE.fullmatch(text.strip(" "))
    if match is None:
        raise UnitError(f"found {echo(text)}; a range is needed, as '{example}'")
    low, first, high, last = match.groups()
    return (low, first or last), (high, last or first)


def parse_number(text: str) -> float:
    """Read a number without a unit, as ``0.52``.

    Raises
    ------
    UnitError
        The text is none.
    """
    if not re.fullmatch(NUMBER, text.strip(" ")):
        raise UnitError(f"found {echo(text)}; a bare number is needed")
    number = float(text)
    if not math.isfinite(number):
        raise UnitError(f"found {echo(text)}; the number is too large")
    return number


def to_display(value: float, unit: str) -> float:
    """Convert an SI value to a unit of the table.

    Examples
    --------
    >>> to_display(0.01, "m3/h")
    36.0
    """
    entry = _BY_TEXT[unit]
    return (value - entry.offset) / entry.factor


def format_value(value: float, unit_or_dimension: str, digits: int = 4) -> str:
    """Write an SI value in a unit of the table, or in the usual unit of a dimension.

    ``digits`` are significant ones. A value that is not finite is written as a dash.

    Examples
    --------
    >>> format_value(140 / 3600, "volume flow")
    '140.0 m3/h'
    >>> format_value(5e-5, "mm", 2)
    '0.050 mm'
    """
    unit = _DISPLAY.get(unit_or_dimension, unit_or_dimension)
    return f"{significant(to_display(value, unit), digits)} {unit}"


def format_si(value: float, unit: str) -> str:
    """Write a figure given in an SI unit, none or one of the table, in the unit an engineer reads it in.

    Examples
    --------
    >>> format_si(310_000.0, "Pa"), format_si(12.0, "Pa"), format_si(0.0389, "m3/s"), format_si(0.5, "")
    ('310.0 kPa', '12.00 Pa', '140.0 m3/h', '0.5000')
    """
    if unit == "Pa/m":
        return f"{significant(value / 1e3)} kPa/m"
    if unit == "Pa" and abs(value) < 1e3:
        return format_value(value, unit)
    read_in = {"Pa": "kPa", "m3/s": "m3/h", "W": "kW"}.get(unit, unit)
    return format_value(value, read_in) if unit else significant(value)


def significant(value: float, digits: int = 4) -> str:
    """Write a number to so many significant digits, without an exponent between 1e-5 and 1e7."""
    if not math.isfinite(value):
        return "–"
    rounded = float(f"{value:.{digits - 1}e}")
    if rounded == 0:
        return "0"
    if not 1e-5 <= abs(rounded) < 1e7:
        return f"{rounded:.{digits - 1}e}"
    decimals = digits - 1 - math.floor(math.log10(abs(rounded)))
    return f"{rounded:.{max(decimals, 0)}f}"


def echo(text: str) -> str:
    """Quote a text from a file for a message: control characters escaped, cut to 40 characters."""
    shown = "".join(char if char.isprintable() else _escape(char) for char in text[: ECHO_LENGTH + 1])
    return f"'{shown}'" if len(shown) <= ECHO_LENGTH else f"'{shown[: ECHO_LENGTH - 1]}…'"


def number_advice(text: str) -> str:
    """Say how the number at the start of a text with a comma or a space in it is written instead.

    Examples
    --------
    >>> number_advice("0,9 mPa.s")
    'numbers have a decimal point: 0.9 mPa.s'
    >>> number_advice("1,420 kg/m3")
    'numbers have a decimal point and no thousands mark, as 1234.5'
    """
    is_sure = _DECIMAL_COMMA.match(text) and len(text) <= ECHO_LENGTH
    meant = echo(text.replace(",", ".", 1))[1:-1]
    return f"numbers have a decimal point{f': {meant}' if is_sure else ' and no thousands mark, as 1234.5'}"


@cache
def accepted(*dimensions: str) -> str:
    """List the units an error offers for a dimension, the commonest first."""
    each = 6 // len(dimensions)
    return ", ".join(text for dimension in dimensions for text in list(UNITS[dimension])[:each])


def _escape(char: str) -> str:
    return char.encode("unicode_escape").decode("ascii")


def _in_si(text: str, number: str, unit: Unit) -> float:
    value = float(number) * unit.factor + unit.offset
    if not math.isfinite(value):
        raise UnitError(f"found {echo(text)}; the number is too large")
    return value


def _normal(written: str) -> str:
    text = " ".join(written.translate(_TYPOGRAPHY).split(" "))
    return text.replace("^3", "3").replace("^2", "2")


def _find(text: str, written: str, dimensions: tuple[str, ...]) -> Unit:
    normal = _normal(written)
    for dimension in dimensions:
        if normal in UNITS[dimension]:
            return UNITS[dimension][normal]
    raise UnitError(_wrong_unit(text, written, normal, dimensions))


def _not_a_quantity(text: str, dimensions: tuple[str, ...]) -> str:
    return f"found {echo(text)}; a number and a unit are needed: {accepted(*dimensions)}"


def _wrong_unit(text: str, written: str, normal: str, dimensions: tuple[str, ...]) -> str:
    if not written:
        return f"found {echo(text)} without a unit; give one of {accepted(*dimensions)}"
    found = f"found {echo(text)}"
    if re.match(r",|[ ]*[0-9]+([ ,.]|$)", written):
        return f"{found}; {number_advice(text)}"
    hints = _HINTS | _ABSOLUTE_HINTS if "absolute pressure" in dimensions else _HINTS
    if normal in hints:
        return f"{found}; {hints[normal]}; units that fit: {accepted(*dimensions)}"
    return f"{found}; {_advice(written, normal, dimensions)}units that fit: {accepted(*dimensions)}"


def _advice(written: str, normal: str, dimensions: tuple[str, ...]) -> str:
    near = _similar(normal, dimensions)
    if near:
        return f"did you mean {' or '.join(near)}? "
    if normal in _BY_TEXT:
        return f"{normal} is a unit of {_BY_TEXT[normal].dimension}; "
    return f"unknown unit {echo(written)}; "


def _similar(normal: str, dimensions: tuple[str, ...]) -> list[str]:
    """Spellings that differ in case, or else the one nearest in letters."""
    known = [text for dimension in dimensions for text in UNITS[dimension]]
    same = [text for text in known if text.casefold() == normal.casefold()]
    if same or normal in _BY_TEXT:
        return same
    return get_close_matches(normal[:ECHO_LENGTH], known, n=1, cutoff=0.6)
