"""Printing: back in the language without loss, and for people."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from netaudit.place import Place
from netaudit.quantities.quantity import Quantity
from netaudit.quantities.read import read_number, read_quantity
from netaudit.quantities.units import UNITS
from netaudit.quantities.write import engineering, write_number, write_quantity

HERE = Place("t", 1)
UNIT = st.sampled_from(sorted(UNITS))
NUMBER = st.floats(allow_nan=False, allow_infinity=False, allow_subnormal=False)
SHARE = st.floats(0, 100, allow_subnormal=False)
MODERATE = st.floats(-1e12, 1e12).filter(lambda x: x == 0 or abs(x) > 1e-12)


def physical(x: float, unit: str) -> float:
    """A temperature is kept above absolute zero."""
    return abs(x) if unit == "degC" else x


@settings(derandomize=True, deadline=None)
@given(NUMBER, UNIT)
def test_a_number_prints_and_reads_back(x: float, unit: str) -> None:
    x = physical(x, unit)
    assert read_number(write_number(x, unit), unit, HERE) == x


@settings(derandomize=True, deadline=None)
@given(MODERATE, MODERATE, MODERATE, UNIT)
def test_a_range_prints_and_reads_back(a: float, b: float, c: float, unit: str) -> None:
    low, nominal, high = sorted(physical(x, unit) for x in (a, b, c))
    q = Quantity(nominal, unit, low, high, "range")
    assert read_quantity(write_quantity(q), unit, HERE) == q


@settings(derandomize=True, deadline=None)
@given(MODERATE, SHARE, st.floats(0, 1000), st.sampled_from(sorted(set(UNITS) - {"degC"})))
def test_a_percentage_prints_and_reads_back(x: float, below: float, above: float, unit: str) -> None:
    number = write_number(x, unit)
    for span in (f"{write_number(below, '1')}%", f"-{write_number(below, '1')}%..+{write_number(above + 0.5, '1')}%"):
        q = read_quantity(f"{number},{span}", unit, HERE)
        text = write_quantity(q)
        assert read_quantity(text, unit, HERE) == q


@settings(derandomize=True, deadline=None)
@given(MODERATE, st.floats(0, 1e6).filter(lambda x: x == 0 or x > 1e-12), UNIT)
def test_an_absolute_tolerance_prints_and_reads_back(x: float, half: float, unit: str) -> None:
    x = physical(x, unit) + (1e7 if unit == "degC" else 0.0)
    width = write_number(half, "K" if unit == "degC" else unit)
    q = read_quantity(f"{write_number(x, unit)},±{width}", unit, HERE)
    assert read_quantity(write_quantity(q), unit, HERE) == q


@pytest.mark.parametrize(
    ("text", "unit", "printed"),
    [
        ("4k7J", "ohm", "4700ohm,5%"), ("5.1V,5%", "V", "5.1V,5%"), ("100nF,-20%..+80%", "F", "1e-07F,-20%..+80%"),
        ("2.5V,±25mV", "V", "2.5V,±0.025V"), ("25degC,±5K", "degC", "25degC,±5K"), ("150%", "1", "1.5"),
        ("50ppm/K,10%", "1/K", "5e-05/K,10%"), ("-0.6ppm/K2", "1/K2", "-6e-07/K2"), ("0.5,0.2..0.8", "1", "0.5,0.2..0.8"),
        ("-5V,-10%..+5%", "V", "-5V,-10%..+5%"),
    ],
)  # fmt: skip
def test_what_is_printed_is_what_a_person_would_write(text: str, unit: str, printed: str) -> None:
    assert write_quantity(read_quantity(text, unit, HERE)) == printed


def test_a_span_that_no_tolerance_gives_becomes_a_range() -> None:
    q = Quantity(5.0, "V", 4.0, 7.0, "absolute")
    assert read_quantity(write_quantity(q), "V", HERE) == Quantity(5.0, "V", 4.0, 7.0, "range")
    q = Quantity(5.0, "V", -4.0, 7.0, "percent")
    assert read_quantity(write_quantity(q), "V", HERE) == Quantity(5.0, "V", -4.0, 7.0, "range")


@pytest.mark.parametrize(
    ("value", "unit", "printed"),
    [
        (1.44, "W", "1.44 W"), (0.0123, "A", "12.3 mA"), (4700.0, "ohm", "4.7 kohm"), (85.0, "degC", "85 degC"),
        (4.7e-6, "F", "4.7 uF"), (0.9999, "V", "1 V"), (999.6, "V", "1 kV"), (999.4, "V", "999 V"), (0.0, "A", "0 A"),
        (-0.0, "A", "0 A"), (-0.0123, "A", "-12.3 mA"), (1234.5, "degC", "1234 degC"), (5e-5, "1/K", "50 ppm/K"),
        (-2e-3, "V/K", "-2 mV/K"), (450.0, "K/W", "450 K/W"), (29700.0, "1", "29700"), (0.5, "1", "0.5"),
        (1e17, "A", "1e+17 A"), (1e-21, "A", "1e-21 A"), (1e-18, "A", "1 aA"), (float("inf"), "V", "inf V"),
        (float("nan"), "W", "nan W"), (0.02, "A/V2", "20 mA/V2"), (1.12, "eV", "1.12 eV"), (100.0, "ohm", "100 ohm"),
    ],
)  # fmt: skip
def test_for_people(value: float, unit: str, printed: str) -> None:
    assert engineering(value, unit) == printed


def test_digits_are_asked_for() -> None:
    assert engineering(0.123456, "V", 5) == "123.46 mV"
    assert engineering(123.0, "V", 2) == "120 V"


@settings(derandomize=True, deadline=None)
@given(st.floats(1e-17, 1e14), st.sampled_from(["V", "A", "W", "ohm", "F"]), st.integers(3, 9))
def test_what_people_see_is_the_value_to_its_digits(x: float, unit: str, digits: int) -> None:
    number, form = engineering(x, unit, digits).split(" ")
    assert read_number(number + form, unit, HERE) == pytest.approx(x, rel=0.51 * 10.0 ** (1 - digits))
