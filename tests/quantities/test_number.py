"""One number: prefixes, units, limits of a double, and the mistakes with their mends."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.read import read_number
from netaudit.quantities.units import FORMS, PREFIXES, UNITS, measures

HERE = Place("t", 1)


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("4.7kohm", "ohm", 4700.0), ("10k\u03a9", "ohm", 1e4), ("10k\u2126", "ohm", 1e4), ("10uF", "F", 1e-5), ("10µF", "F", 1e-5),
        ("10μF", "F", 1e-5), ("250mW", "W", 0.25), ("10fA", "A", 1e-14), ("1aA", "A", 1e-18), ("3TV", "V", 3e12),
        ("-40degC", "degC", -40.0), ("25°C", "degC", 25.0), ("298.15K", "degC", 25.0), ("0K", "degC", -273.15),
        ("450K/W", "K/W", 450.0), ("50ppm/K", "1/K", 5e-5), ("-0.6ppm/K2", "1/K2", -6e-7), ("-0.6ppm/K²", "1/K2", -6e-7),
        ("0.4%/K", "1/K", 0.004), ("0.00393/K", "1/K", 0.00393), ("-2mV/K", "V/K", -0.002), ("1.12eV", "eV", 1.12),
        ("0.5A/V2", "A/V2", 0.5), ("20mA/V²", "A/V2", 0.02), ("1e-14", "A", 1e-14), ("1e3mV", "V", 1.0),
        ("85%", "1", 0.85), ("200", "1", 200.0), ("1k", "V", 1000.0), ("+5V", "V", 5.0), ("40K", "K", 40.0),
        ("1uS", "S", 1e-6), ("0V", "V", 0.0), ("-0.000V", "V", 0.0), ("4.7u", "H", 4.7e-6),
    ],
)  # fmt: skip
def test_numbers(text: str, unit: str, value: float) -> None:
    assert read_number(text, unit, HERE) == value


@settings(derandomize=True, deadline=None)
@given(st.integers(0, 10**9), st.integers(0, 8), st.sampled_from(sorted(PREFIXES)))
def test_a_prefix_is_the_same_as_its_exponent_and_rounded_once(digits: int, places: int, prefix: str) -> None:
    whole, part = divmod(digits, 10**places)
    mantissa = f"{whole}.{part:0{places}d}" if places else str(whole)
    assert read_number(f"{mantissa}{prefix}A", "A", HERE) == float(f"{mantissa}e{PREFIXES[prefix]}")


MISTAKES = [
    ("12mv", "V", "12mV"), ("10UF", "F", "10uF"), ("10uf", "F", "10uF"), ("10KV", "V", "10kV"), ("5v", "V", "5V"),
    ("1Meg", "ohm", "1M;"), ("1meg", "ohm", "1M;"), ("1Megohm", "ohm", "1Mohm"), ("10kOhm", "ohm", "10kohm"),
    ("5ohms", "ohm", "5ohm"), ("5volts", "V", "5V"), ("25C", "degC", "25degC"), ("4.7K", "ohm", "4.7k"),
    ("1E-14", "A", "1e-14"), ("1.5E3ohm", "ohm", "1.5e3ohm"), ("5,1V", "V", "5.1V"), (".5V", "V", "before its point"),
    ("5.V", "V", "both sides"), ("5.", "V", "both sides"), ("1.2.3", "V", "both sides"), ("10 V", "V", "blank inside"),
    ("−5V", "V", "minus sign"), ("25", "degC", "has no unit"), ("25m", "degC", "has no unit"), ("10V", "ohm", "is a voltage"),
    ("10ohm", "V", "is a resistance"), ("10degC", "K", "10K"), ("450degC/W", "K/W", "450K/W"), ("450°C/W", "K/W", "450K/W"),
    ("50ppm/degC", "1/K", "50ppm/K"), ("5hz", "V", "not a unit"), ("nan", "V", "not a number"), ("inf", "V", "not a number"),
    ("", "V", "missing"), ("V", "V", "not a number"), ("1e400ohm", "ohm", "not finite"), ("-1e400", "V", "not finite"),
    ("1e308kV", "V", "not finite"), ("1e-400", "A", "too small"), ("1e-310A", "A", "too small"), ("-300degC", "degC", "zero"),
    ("-1K", "degC", "zero"), ("5%", "V", "number without unit"), ("1e", "A", "not a unit"), ("0x10", "V", "not a unit"),
    ("1_000", "V", "not a unit"), ("٣V", "V", "not a number"),
]  # fmt: skip


@pytest.mark.parametrize(("text", "unit", "words"), MISTAKES)
def test_mistakes_say_what_to_write(text: str, unit: str, words: str) -> None:
    with pytest.raises(InputError) as caught:
        read_number(text, unit, Place("board", 7, 3))
    said = str(caught.value)
    assert said.startswith("board:7:3: ")
    assert words in said
    assert caught.value.mend
    assert "\n" not in said


@pytest.mark.parametrize(
    "text", ["9" * 100_000, "0." + "1" * 100_000, "1e" + "9" * 100_000, "-" * 100_000, "9m" * 50_000]
)
def test_endless_texts_are_refused_and_not_repeated(text: str) -> None:
    with pytest.raises(InputError, match="too long") as caught:
        read_number(text, "ohm", HERE)
    assert len(str(caught.value)) < 200


def test_a_long_exponent_within_the_limit_does_not_overflow() -> None:
    with pytest.raises(InputError, match="not finite"):
        read_number("1e" + "9" * 900, "V", HERE)
    with pytest.raises(InputError, match="too small"):
        read_number("1e-" + "9" * 900, "V", HERE)
    assert read_number("0e" + "9" * 900, "V", HERE) == 0.0


def test_forms_are_read_as_their_unit_and_as_no_other_dimension() -> None:
    for unit, forms in FORMS.items():
        for form in forms:
            assert unit in measures(form)
            read_number(f"1{form}", unit, HERE)
    # a kelvin is a temperature and a difference; a form with two meanings would need the kind to tell them apart
    shared = {f for forms in FORMS.values() for f in forms if len(measures(f)) > 1}
    assert shared == set()
    assert all(UNITS[u].example for u in UNITS)


@settings(derandomize=True, deadline=None)
@given(st.text(max_size=20), st.sampled_from(sorted(UNITS)))
def test_any_text_is_a_number_or_an_input_error(text: str, unit: str) -> None:
    said = "\n"
    try:
        value = read_number(text, unit, HERE)
    except InputError as error:
        said = str(error)
        value = 0.0
    assert abs(value) < float("inf")
    assert said == "\n" or "\n" not in said
