"""Values with spans: keys' texts, bare items of a statement, conditions."""

from __future__ import annotations

import math
from typing import NamedTuple

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity, exact
from netaudit.quantities.read import classify, combine, read_at, read_number, read_quantity, read_span, rescale

HERE = Place("t", 1)


class W(NamedTuple):
    text: str
    place: Place = HERE


@pytest.mark.parametrize(
    ("text", "shape"),
    [
        ("4k7", "value"), ("R047", "value"), ("-1k", "value"), ("+5V", "value"), (".5V", "value"), ("5,1V", "value"),
        ("−5V", "value"), ("1e400ohm", "value"), ("10.8V..13.2V", "range"), ("..5V", "range"), ("5V..", "range"),
        ("-20degC..60degC", "range"), ("5%", "tolerance"), ("-20%..+80%", "tolerance"), ("±25mV", "tolerance"),
        ("+-25mV", "tolerance"), ("-5%", "tolerance"), ("open", "word"), ("off", "word"), ("$r", "word"), ("", "word"),
        ("R", "word"), ("high", "word"),
    ],
)  # fmt: skip
def test_shapes(text: str, shape: str) -> None:
    assert classify(text) == shape


@pytest.mark.parametrize(
    ("text", "unit", "nominal", "low", "high", "spread"),
    [
        ("5.1V", "V", 5.1, 5.1, 5.1, "none"),
        ("5V,5%", "V", 5.0, 4.75, 5.25, "percent"),
        ("0.5,0.2..0.8", "1", 0.5, 0.2, 0.8, "range"),
        ("200,100..400", "1", 200.0, 100.0, 400.0, "range"),
        ("150%,100%..200%", "1", 1.5, 1.0, 2.0, "range"),
        ("150%,-20%..+80%", "1", 1.5, 1.2, 2.7, "percent"),
        ("50%,10%", "1", 0.5, 0.45, 0.55, "percent"),
        ("2.5V,±25mV", "V", 2.5, 2.475, 2.525, "absolute"),
        ("2.5V,+-0.025V", "V", 2.5, 2.475, 2.525, "absolute"),
        ("100nF,-20%..+80%", "F", 1e-7, 8e-8, 1.8e-7, "percent"),
        ("100nF,0%..+80%", "F", 1e-7, 1e-7, 1.8e-7, "percent"),
        ("-2mV/K,10%", "V/K", -0.002, -0.0022, -0.0018, "percent"),
        ("-2mV/K,-50%..+10%", "V/K", -0.002, -0.0022, -0.001, "percent"),
        ("25degC,±5K", "degC", 25.0, 20.0, 30.0, "absolute"),
        ("900mA..1.2A", "A", 1.05, 0.9, 1.2, "range"),
        ("1k0..2k2", "ohm", 1600.0, 1000.0, 2200.0, "range"),
        ("10..12", "V", 11.0, 10.0, 12.0, "range"),
        ("-20degC..60degC", "degC", 20.0, -20.0, 60.0, "range"),
        ("253.15K..60degC", "degC", 20.0, -20.0, 60.0, "range"),
        ("5V,5V..5V", "V", 5.0, 5.0, 5.0, "range"),
        ("5V,±5%", "V", 5.0, 4.75, 5.25, "percent"),
        ("4k7J", "ohm", 4700.0, 4465.0, 4935.0, "percent"),
    ],
)
def test_quantities(text: str, unit: str, nominal: float, low: float, high: float, spread: str) -> None:
    q = read_quantity(text, unit, HERE)
    assert (q.unit, q.spread) == (unit, spread)
    assert [q.nominal, q.low, q.high] == pytest.approx([nominal, low, high], rel=1e-14)


@pytest.mark.parametrize(
    ("text", "unit", "words"),
    [
        ("13V..11V", "V", "reversed"), ("9..12k", "ohm", "both ends"), ("0..10V", "V", "both ends"),
        ("0.5..80%", "1", "both ends"), ("5V,6V..7V", "V", "outside its range"), ("5V,-5%", "V", "5% for both sides"),
        ("5V,10%..20%", "V", "signs"), ("5V,-5%..5%", "V", "signs"), ("5V,+5%..+10%", "V", "signs"),
        ("5V,150%", "V", "100 % below"), ("25degC,5%", "degC", "percentage"), ("25degC,±5degC", "degC", "difference"),
        ("5V,", "V", "comma"), (",5%", "V", "comma"), ("5V, 5%", "V", "comma"), ("5,1V", "V", "decimal comma"),
        ("5V,4V..6V,5%", "V", "not a unit"), ("4V..6V,5V", "V", "after the value"), ("5V,..6V", "V", "no lower end"),
        ("5V..", "V", "no upper end"), ("..", "V", "end"), ("5V,x", "V", "range or a tolerance"),
        ("5V,±-1V", "V", "sign after"), ("5V,±", "V", "missing"), ("5V,%", "V", "not a tolerance"),
        ("4k7J,5%", "ohm", "two tolerances"), ("4k7J,4k..5k", "ohm", "tolerance letter"), ("1k0J..2k0", "ohm", "letter"),
        ("-270degC,±10K", "degC", "absolute zero"), ("1e308V,100%", "V", "range of numbers"), ("5V...6V", "V", "point"),
        ("5V,5V,5V", "V", "range or a tolerance"),
    ],
)  # fmt: skip
def test_spans_that_cannot_be_meant(text: str, unit: str, words: str) -> None:
    with pytest.raises(InputError, match=words):
        read_quantity(text, unit, HERE)


def test_one_sided_spans() -> None:
    assert read_span("..50mW", "W", HERE, one_sided=True) == (-math.inf, 0.05)
    assert read_span("4.5V..", "V", HERE, one_sided=True) == (4.5, math.inf)
    assert read_span("-1..1", "V", HERE, one_sided=True) == (-1.0, 1.0)
    for text, words in (("..", "end"), ("5V", "not a range"), ("..x", "not a number")):
        with pytest.raises(InputError, match=words):
            read_span(text, "V", HERE, one_sided=True)
    with pytest.raises(InputError, match="no lower end"):
        read_span("..50mW", "W", HERE)


def test_bare_items_of_a_statement() -> None:
    assert combine(W("12V"), W("10.8V..13.2V"), None, ("V",), HERE) == Quantity(12.0, "V", 10.8, 13.2, "range")
    assert combine(None, W("1k..3k"), None, ("ohm",), HERE) == Quantity(2000.0, "ohm", 1000.0, 3000.0, "range")
    assert combine(W("1k"), None, W("5%"), ("ohm",), HERE) == Quantity(1000.0, "ohm", 950.0, 1050.0, "percent")
    assert combine(W("R047"), None, None, ("ohm",), HERE) == exact(0.047, "ohm")


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("50mA", (0.05, "A")),
        ("5W", (5.0, "W")),
        ("100ohm", (100.0, "ohm")),
        ("4k7", (4700.0, "ohm")),
        ("10R", (10.0, "ohm")),
    ],
)
def test_the_unit_decides_where_several_are_allowed(text: str, expected: tuple[float, str]) -> None:
    q = combine(W(text), None, W("10%"), ("A", "W", "ohm"), HERE, code=True)
    assert (q.nominal, q.unit) == expected
    assert q.spread == "percent"


def test_the_unit_of_a_range_decides_too() -> None:
    assert combine(None, W("1W..3W"), None, ("A", "W", "ohm"), HERE).unit == "W"


@pytest.mark.parametrize("text", ["10", "100m", "5V", "1e3"])
def test_several_units_and_none_that_tells(text: str) -> None:
    with pytest.raises(InputError, match=r"a current .* or a power .* or a resistance"):
        combine(W(text), None, None, ("A", "W", "ohm"), HERE, code=True)


def test_a_range_and_a_tolerance_or_neither_value() -> None:
    there = Place("t", 9)
    with pytest.raises(InputError, match="both a range") as caught:
        combine(W("1k"), W("0.9k..1.1k"), W("5%", there), ("ohm",), HERE)
    assert caught.value.place == there
    with pytest.raises(InputError, match="without a value"):
        combine(None, None, W("5%"), ("ohm",), HERE)
    with pytest.raises(InputError, match="missing"):
        combine(None, None, None, ("ohm",), HERE)
    with pytest.raises(InputError, match="write a blank instead: 1k 5%"):
        combine(W("1k,5%"), None, None, ("ohm",), HERE)


def test_values_at_a_condition() -> None:
    assert read_at("100uA @ 40V", "A", "V", HERE) == (exact(1e-4, "A"), exact(40.0, "V"))
    assert read_at("25mA@25degC", "A", "degC", HERE) == (exact(0.025, "A"), exact(25.0, "degC"))
    assert read_at("25mA", "A", "degC", HERE) == (exact(0.025, "A"), None)
    value, _ = read_at("0.65V,0.6V..0.7V @ 1mA", "V", "A", HERE)
    assert (value.low, value.high) == (0.6, 0.7)
    for text, words in (("25mA @", "after @"), ("@ 5V", "missing"), ("25mA @ 5", "no unit")):
        with pytest.raises(InputError, match=words):
            read_at(text, "A", "degC", HERE)


def test_a_new_nominal_keeps_a_percentage_only() -> None:
    assert rescale(read_quantity("1k,5%", "ohm", HERE), 2000.0) == Quantity(2000.0, "ohm", 1900.0, 2100.0, "percent")
    assert rescale(read_quantity("5V,4V..6V", "V", HERE), 7.0) == exact(7.0, "V")
    assert rescale(read_quantity("5V,±1V", "V", HERE), 7.0) == exact(7.0, "V")
    flipped = rescale(read_quantity("5V,-10%..+20%", "V", HERE), -5.0)
    assert (flipped.low, flipped.high) == (-6.0, -4.5)


def test_no_percentage_at_all_leaves_the_nominal() -> None:
    # 100 x / 100 is not x for every double
    for k in range(1, 2000):
        q = read_quantity(f"{k / 7!r}V,0%", "V", HERE)
        assert q.low == q.nominal == q.high


@settings(derandomize=True, deadline=None)
@given(
    st.floats(-1e9, 1e9, allow_nan=False).filter(lambda x: x == 0 or abs(x) > 1e-200),
    st.floats(0, 100),
    st.floats(0, 900),
)
def test_the_nominal_lies_in_its_span(nominal: float, below: float, above: float) -> None:
    q = read_quantity(f"{nominal!r},-{below:.3f}%..+{above + 0.001:.3f}%", "V", HERE)
    assert q.low <= q.nominal <= q.high


@settings(derandomize=True, deadline=None)
@given(st.text(alphabet="0123456789.,%±+-VkmeE @KRdegC", max_size=16), st.sampled_from(["V", "ohm", "degC", "1"]))
def test_any_text_is_a_quantity_or_an_input_error(text: str, unit: str) -> None:
    try:
        q = read_quantity(text, unit, HERE)
    except InputError:
        return
    assert q.low <= q.nominal <= q.high
    assert (
        read_number(text, unit, HERE) == q.nominal
        if q.spread == "none"
        else q.spread in ("range", "percent", "absolute")
    )
