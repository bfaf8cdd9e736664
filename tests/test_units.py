"""The table of units against pint, and what the border refuses."""

from __future__ import annotations

import math

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from pipeflow import units

REGISTRY = pint.UnitRegistry()
REGISTRY.define("hundred_square_feet = 100 * ft**2")

# A spelling of ours that pint reads otherwise, as pint writes it.
PINT_SPELLING = {
    "US gpm": "US_liquid_gallon / minute",
    "gpm": "US_liquid_gallon / minute",
    "Pa s": "Pa * s",
    "mPa s": "mPa * s",
    "lbf/100ft2": "lbf / hundred_square_feet",
    "lbf.s^n/100ft2": "lbf / hundred_square_feet",
    "rev/min": "revolution / minute",
    "lb/ft3": "pound / ft**3",
    "s-1": "1/s",
    "/s": "1/s",
    "r/min": "revolution / minute",
    "°C": "degC",
    "°F": "degF",
    "um": "micrometer",
    "uPa.s": "micropascal * second",
    "P": "poise",
    "kPa(a)": "kPa",
    "bara": "bar",
    "psia": "psi",
    "uN.m": "micronewton * m",
    "Nm": "newton * m",
    "mNm": "millinewton * m",
}

BASE_UNITS = {
    "length": "m",
    "pressure": "Pa",
    "absolute pressure": "Pa",
    "stress": "Pa",
    "viscosity": "Pa*s",
    "consistency": "Pa",
    "density": "kg/m**3",
    "volume flow": "m**3/s",
    "mass flow": "kg/s",
    "velocity": "m/s",
    "shear rate": "1/s",
    "rotational speed": "rad/s",
    "temperature": "K",
    "temperature difference": "K",
    "specific heat": "J/(kg*K)",
    "molar energy": "J/mol",
    "time": "s",
    "power": "W",
    "torque": "N*m",
}

ENTRIES = [(dimension, unit.text) for dimension, table in units.UNITS.items() for unit in table.values()]


def pint_text(text: str) -> str:
    if text in PINT_SPELLING:
        return PINT_SPELLING[text]
    # the factor of a consistency does not depend on n: compare the stress in front of s^n
    plain = text.replace("*", "").replace(" s^n", "").replace(".s^n", "")
    for power in ("2", "3"):
        plain = plain.replace(f"m{power}", f"m**{power}").replace(f"ft{power}", f"ft**{power}")
    return plain.replace(".", "*")


@pytest.mark.parametrize(("dimension", "text"), ENTRIES)
def test_every_entry_of_the_table_agrees_with_pint(dimension: str, text: str) -> None:
    for number in (1.0, 3.7):
        expected = REGISTRY.Quantity(number, pint_text(text)).to(BASE_UNITS[dimension]).magnitude
        assert units.parse(f"{number} {text}", dimension) == pytest.approx(expected, rel=1e-12)


def test_the_table_covers_every_dimension_and_has_a_display_unit_for_each() -> None:
    assert set(units.UNITS) == set(BASE_UNITS)
    for dimension in units.UNITS:
        number, unit = units.format_value(1.0, dimension).split(" ", 1)
        assert units.parse(f"{number} {unit}", dimension) == pytest.approx(
            1.0, abs=0.06 if dimension == "temperature" else 1e-3
        )


def test_a_spelling_means_the_same_in_every_dimension_that_has_it() -> None:
    factors: dict[str, set[float]] = {}
    for table in units.UNITS.values():
        for unit in table.values():
            factors.setdefault(unit.text, set()).add(unit.factor)
    assert all(len(values) == 1 for values in factors.values())


@pytest.mark.parametrize(
    ("text", "dimension", "value"),
    [
        ("140m3/h", "volume flow", 140 / 3600),
        ("140 m³/h", "volume flow", 140 / 3600),
        ("140 m^3/h", "volume flow", 140 / 3600),
        ("2 l/s", "volume flow", 2e-3),
        ("21 mPa·s", "viscosity", 21e-3),
        ("21 mPa*s", "viscosity", 21e-3),
        ("0.62 Pa·s^n", "consistency", 0.62),
        ("5 µm", "length", 5e-6),  # micro sign
        ("5 μm", "length", 5e-6),  # Greek mu
        ("5 s⁻¹", "shear rate", 5.0),
        ("2.5e-05 m", "length", 2.5e-5),
        ("+1. m", "length", 1.0),
        ("-.5E+1 m", "length", -5.0),
        ("20 °C", "temperature", 293.15),
    ],
)
def test_spellings_engineers_type(text: str, dimension: str, value: float) -> None:
    assert units.parse(text, dimension) == pytest.approx(value, rel=1e-14)


@pytest.mark.parametrize(
    ("text", "dimension", "hint"),
    [
        ("1,5 m", "length", "decimal point"),
        ("1 000 m", "length", "thousands mark"),
        ("1,000.5 m", "length", "thousands mark"),
        ("1_000 m", "length", "unknown unit"),
        ("nan m", "length", "a number and a unit"),
        ("inf m", "length", "a number and a unit"),
        ("1e999 m", "length", "too large"),
        ("1e308 km", "length", "too large"),
        ("12:30", "time", "unknown unit"),
        ("0x1F m", "length", "unknown unit"),
        ("1.2.3 m", "length", "unknown unit"),
        ("−1 m", "length", "a number and a unit"),  # the typographer's minus is not a sign
        ("１ m", "length", "a number and a unit"),  # a full-width digit
        ("m", "length", "a number and a unit"),
        ("", "length", "a number and a unit"),
        ("5 C", "temperature", "°C"),
        ("1 mb", "pressure", "mbar"),
        ("140", "volume flow", "without a unit"),
        ("3 t", "mass flow", "unknown unit"),
        ("3 bar", "length", "bar is a unit of pressure"),
        ("3 mPa", "pressure", "did you mean MPa?"),
        ("3 Kpa", "pressure", "did you mean kPa?"),
        ("3 ton/h", "mass flow", "1000 kg/h"),
        ("3 gal/min", "volume flow", "US gallon"),
        ("3 GPM", "volume flow", "US gpm"),
        ("3 hp", "power", "kW"),
        ("3 cSt", "viscosity", "kinematic"),
        ("3 m\u0000", "length", "did you mean m?"),
        ("3 bara", "pressure", "less the atmosphere"),
        ("3 kPa(a)", "pressure", "a unit of absolute pressure"),
        ("3 psig", "absolute pressure", "an absolute pressure is needed"),
    ],
)
def test_what_is_refused_and_the_advice_given(text: str, dimension: str, hint: str) -> None:
    with pytest.raises(units.UnitError) as caught:
        units.parse(text, dimension)
    message = str(caught.value)
    assert hint in message
    assert message.isprintable()
    assert len(message) < 160


def test_an_error_lists_units_that_are_accepted() -> None:
    with pytest.raises(units.UnitError) as caught:
        units.parse("140", "volume flow", "mass flow")
    offered = str(caught.value).split("give one of ")[1].split(", ")
    assert offered == ["m3/h", "m3/s", "L/s", "kg/h", "t/h", "kg/s"]
    for unit in offered:
        assert units.parse(f"140 {unit}", "volume flow", "mass flow") > 0


def test_of_two_dimensions_the_one_found_is_told() -> None:
    assert units.parse_with_dimension("36 t/h", "volume flow", "mass flow") == (
        pytest.approx(10.0),
        "mass flow",
    )
    assert units.parse_with_dimension("36 m3/h", "volume flow", "mass flow")[1] == "volume flow"


RANGES = ["5 .. 400 1/s", "5..400 1/s", "5. .. 4e2 1/s", "5 ..400 s^-1", "5 1/s .. 400 s^-1", "5s^-1..400 1/s"]


@pytest.mark.parametrize("text", RANGES)
def test_ranges(text: str) -> None:
    assert units.parse_range(text, "shear rate") == (5.0, 400.0)


@pytest.mark.parametrize(
    "text",
    ["400 .. 5 1/s", "5 .. 5 1/s", "5 1/s", "5 - 400 1/s", "5 .. 400", "5 .. 4 m", "5...400 1/s", "5 ... 400 1/s"],
)
def test_ranges_refused(text: str) -> None:
    with pytest.raises(units.UnitError, match="found"):
        units.parse_range(text, "shear rate")


@given(st.sampled_from(ENTRIES), st.floats(-1e12, 1e12))
def test_round_trip_through_every_unit(entry: tuple[str, str], number: float) -> None:
    dimension, text = entry
    shown = units.to_display(units.parse(f"{number!r} {text}", dimension), text)
    # an affine unit loses the digits of its offset
    assert shown == pytest.approx(number, rel=1e-12, abs=1e-300 if dimension != "temperature" else 1e-9)


@given(st.sampled_from(ENTRIES), st.floats(1e-3, 1e9), st.integers(1, 15))
def test_what_is_written_is_read_back_to_its_digits(entry: tuple[str, str], value: float, digits: int) -> None:
    dimension, text = entry
    written = units.format_value(value, text, digits)
    shown = units.to_display(value, text)
    assert units.to_display(units.parse(written, dimension), text) == pytest.approx(
        shown, rel=0.5000001 * 10.0 ** (1 - digits) + 1e-14, abs=1e-9 if dimension == "temperature" else 0
    )


@given(st.text())
def test_any_text_gives_a_finite_number_or_a_unit_error(text: str) -> None:
    try:
        outcome = str(units.parse(text, "length"))
    except units.UnitError as error:
        outcome = str(error)
    assert outcome.isprintable()
    assert outcome not in ("nan", "inf", "-inf", "")


@pytest.mark.parametrize(
    ("value", "unit", "digits", "text"),
    [
        (140 / 3600, "volume flow", 4, "140.0 m3/h"),
        (0.0, "m", 4, "0 m"),
        (-1.5, "length", 2, "-1.5 m"),
        (9.9996, "m", 4, "10.00 m"),
        (123456.0, "m", 3, "123000 m"),
        (2e9, "m", 3, "2.00e+09 m"),
        (math.nan, "kPa", 4, "– kPa"),
        (293.15, "temperature", 3, "20.0 °C"),
    ],
)
def test_numbers_as_they_are_written(value: float, unit: str, digits: int, text: str) -> None:
    assert units.format_value(value, unit, digits) == text


def test_an_echo_is_cut_and_printable() -> None:
    assert units.echo("a\x1b[31m\n") == "'a\\x1b[31m\\n'"
    long = units.echo("x" * 1000)
    assert len(long) == units.ECHO_LENGTH + 2
    assert long.endswith("…'")
