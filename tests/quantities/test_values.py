"""Values, codes, ranges and tolerances; print and parse are inverse."""

from __future__ import annotations

import math

import eseries
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity, exact
from netaudit.quantities.read import classify, combine, read_at, read_number, read_quantity, read_span
from netaudit.quantities.write import engineering, write_number, write_quantity
from netaudit.syntax.statements import Word

HERE = Place("t", 1)
UNITS = ["V", "A", "W", "ohm", "F", "H", "degC", "K", "1", "K/W", "1/K", "V/K", "A/V2"]


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("4.7kohm", "ohm", 4700.0), ("10uF", "F", 1e-5), ("250mW", "W", 0.25), ("10fA", "A", 1e-14), ("-40degC", "degC", -40.0),
        ("300.15K", "degC", 27.0), ("1e-14", "A", 1e-14), ("450K/W", "K/W", 450.0), ("50ppm/K", "1/K", 5e-5),
        ("-0.6ppm/K2", "1/K2", -6e-7), ("-2mV/K", "V/K", -2e-3), ("12", "V", 12.0), ("1Mohm", "ohm", 1e6), ("1mohm", "ohm", 1e-3),
        ("10µA", "A", 1e-5), ("25°C", "degC", 25.0), ("472", "ohm", 472.0), ("0R", "ohm", 0.0),
    ],
)  # fmt: skip
def test_numbers_with_units(text: str, unit: str, value: float) -> None:
    assert read_number(text, unit, HERE, code=unit in "ohm F H") == pytest.approx(value, rel=1e-15)


# IEC 60062:2016, examples of the standard
@pytest.mark.parametrize(
    ("code", "ohms"),
    [
        ("R47", 0.47),
        ("4R7", 4.7),
        ("470R", 470.0),
        ("4K7", 4700.0),
        ("47K", 47e3),
        ("47K3", 47.3e3),
        ("470K", 470e3),
        ("4M7", 4.7e6),
    ],
)
def test_resistance_codes_of_iec_60062(code: str, ohms: float) -> None:
    assert read_number(code, "ohm", HERE, code=True) == pytest.approx(ohms, rel=1e-15)


@pytest.mark.parametrize(
    ("code", "farads"), [("47n", 47e-9), ("4u7", 4.7e-6), ("4n7", 4.7e-9), ("p33", 0.33e-12), ("100p", 1e-10)]
)
def test_capacitance_codes(code: str, farads: float) -> None:
    assert read_number(code, "F", HERE, code=True) == pytest.approx(farads, rel=1e-15)


def test_every_value_of_iec_60063_reads_as_a_code() -> None:
    """Values of E24 by the package eseries 1.2.1."""
    for value in eseries.series(eseries.ESeries.E24):
        assert read_number(f"{value // 10}k{value % 10}", "ohm", HERE, code=True) == pytest.approx(value * 100.0)


@pytest.mark.parametrize(
    ("letter", "percent"), [("F", 1.0), ("G", 2.0), ("J", 5.0), ("K", 10.0), ("M", 20.0), ("B", 0.1), ("D", 0.5)]
)
def test_tolerance_letters(letter: str, percent: float) -> None:
    q = combine(Word("4k7" + letter, HERE), None, None, ("ohm",), HERE, code=True)
    assert q.low == pytest.approx(4700 * (1 - percent / 100))
    assert q.high == pytest.approx(4700 * (1 + percent / 100))


def test_ranges_and_tolerances() -> None:
    assert read_quantity("400,200..800", "1", HERE) == Quantity(400.0, "1", 200.0, 800.0, "range")
    q = read_quantity("5.1V,5%", "V", HERE)
    assert (q.low, q.high) == (pytest.approx(4.845), pytest.approx(5.355))
    q = read_quantity("150%,100%..200%", "1", HERE)
    assert (q.nominal, q.low, q.high) == (1.5, 1.0, 2.0)
    q = read_quantity("10.8V..13.2V", "V", HERE)
    assert q.nominal == pytest.approx(12.0)
    q = read_quantity("-12V,5%", "V", HERE)
    assert q.low == pytest.approx(-12.6)
    q = combine(Word("100R", HERE), None, Word("-20%..+80%", HERE), ("ohm",), HERE, code=True)
    assert (q.low, q.high) == (pytest.approx(80.0), pytest.approx(180.0))
    q = combine(Word("5V", HERE), None, Word("±25mV", HERE), ("V",), HERE)
    assert (q.low, q.high, q.spread) == (pytest.approx(4.975), pytest.approx(5.025), "absolute")
    assert read_span("..50mW", "W", HERE, one_sided=True) == (-math.inf, pytest.approx(0.05))
    assert read_span("1k0..2k2", "ohm", HERE, code=True) == (1000.0, 2200.0)
    value, at = read_at("100uA @ 40V", "A", "V", HERE)
    assert (value.nominal, at.nominal if at else None) == (pytest.approx(1e-4), 40.0)


@pytest.mark.parametrize(
    ("text", "unit"),
    [
        ("10V", "ohm"), ("12mv", "V"), ("25", "degC"), ("1e400", "ohm"), ("1,5", "V"), (".5", "V"), ("5.", "V"), ("1E3", "V"),
        ("13V..11V", "V"), ("12V,13V..14V", "V"), ("-300degC", "degC"), ("-1K", "degC"), ("4k7F", "F"), ("1megohm", "ohm"),
        ("", "V"), ("V", "V"), ("9" * 5000, "V"), ("nan", "V"), ("inf", "V"), ("1_000", "V"), ("١٢", "V"),
    ],
)  # fmt: skip
def test_what_is_no_value_says_why(text: str, unit: str) -> None:
    with pytest.raises(InputError) as caught:
        read_quantity(text, unit, HERE, code=unit in ("ohm", "F"))
    assert len(str(caught.value)) < 400


@pytest.mark.parametrize(
    ("text", "shape"),
    [("4k7", "value"), ("5%", "tolerance"), ("±25mV", "tolerance"), ("1V..2V", "range"), ("open", "word")],
)
def test_shapes(text: str, shape: str) -> None:
    assert classify(text) == shape


@given(
    value=st.floats(-1e15, 1e15, allow_nan=False).filter(lambda v: v == 0 or abs(v) > 1e-18),
    unit=st.sampled_from(UNITS),
)
@settings(max_examples=200, deadline=None, derandomize=True)
def test_print_then_parse_is_the_same_number(value: float, unit: str) -> None:
    if unit == "degC" and value < -273.15:
        return
    assert read_number(write_number(value, unit), unit, HERE) == value


@given(
    nominal=st.floats(1e-9, 1e9),
    low=st.floats(0.1, 1.0),
    high=st.floats(1.0, 5.0),
    unit=st.sampled_from(["V", "A", "ohm"]),
)
@settings(max_examples=100, deadline=None, derandomize=True)
def test_print_then_parse_is_the_same_range(nominal: float, low: float, high: float, unit: str) -> None:
    q = Quantity(nominal, unit, nominal * low, nominal * high, "range")
    back = read_quantity(write_quantity(q), unit, HERE)
    assert (back.nominal, back.low, back.high) == (q.nominal, q.low, q.high)


def test_numbers_for_people() -> None:
    assert engineering(1.4449, "W") == "1.44 W"
    assert engineering(0.0123, "A") == "12.3 mA"
    assert engineering(4700.0, "ohm") == "4.7 kohm"
    assert engineering(85.0, "degC") == "85 degC"
    assert engineering(0.0, "V") == "0 V"
    assert exact(1.0, "V").varies is False
