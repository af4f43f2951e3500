"""Value codes against the standard's examples and the preferred numbers."""

from __future__ import annotations

import eseries
import pytest

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.code import LETTERS, TOLERANCES, looks_coded, read_code
from netaudit.quantities.read import read_quantity

HERE = Place("t", 1)


# IEC 60062:2016, examples of the resistance code
@pytest.mark.parametrize(
    ("text", "ohms"),
    [
        ("R47", 0.47), ("4R7", 4.7), ("470R", 470.0), ("4K7", 4700.0), ("47K", 47e3), ("47K3", 47.3e3), ("470K", 470e3),
        ("4M7", 4.7e6),
    ],
)  # fmt: skip
def test_examples_of_the_standard(text: str, ohms: float) -> None:
    code = read_code(text, "ohm", HERE)
    assert code is not None
    assert code.value == ohms
    assert code.tolerance is None


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("4k7", "ohm", 4700.0), ("2R2", "ohm", 2.2), ("R047", "ohm", 0.047), ("1M0", "ohm", 1e6), ("0R", "ohm", 0.0),
        ("10m", "ohm", 0.01), ("1G", "ohm", 1e9), ("47n", "F", 47e-9), ("4u7", "F", 4.7e-6), ("4µ7", "F", 4.7e-6),
        ("4μ7", "F", 4.7e-6), ("p47", "F", 0.47e-12), ("2F2", "F", 2.2), ("4u7", "H", 4.7e-6), ("100n", "H", 1e-7),
    ],
)  # fmt: skip
def test_codes_by_unit(text: str, unit: str, value: float) -> None:
    assert read_quantity(text, unit, HERE).nominal == value


def test_digits_alone_are_no_code() -> None:
    assert read_quantity("472", "ohm", HERE).nominal == 472.0
    assert read_code("472", "ohm", HERE) is None
    assert read_code("R", "ohm", HERE) is None
    assert read_code("4u7", "ohm", HERE) is None
    assert read_code("4k7", "V", HERE) is None


# IEC 60063:2015 E24 and E96 by the package eseries 1.2.1
@pytest.mark.parametrize("series", [eseries.E24, eseries.E96])
def test_every_preferred_value_in_every_decade(series: eseries.ESeries) -> None:
    for number in eseries.series(series):
        digits = str(number)
        for letter, exponent in (("R", 0), ("K", 3), ("k", 3), ("M", 6)):
            for cut in range(len(digits) + 1):
                text = f"{digits[:cut]}{letter}{digits[cut:]}"
                expected = float(f"{digits[:cut] or 0}.{digits[cut:] or 0}e{exponent}")
                assert read_quantity(text, "ohm", HERE).nominal == expected


# IEC 60062, letters from memory
@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        ("4k7J", 4465.0, 4935.0), ("4K7K", 4230.0, 5170.0), ("1k0F", 990.0, 1010.0), ("1R0Z", 0.8, 1.8),
        ("1k0B", 999.0, 1001.0), ("1k0E", 999.95, 1000.05),
    ],
)  # fmt: skip
def test_tolerance_letters(text: str, low: float, high: float) -> None:
    q = read_quantity(text, "ohm", HERE)
    assert (q.low, q.high, q.spread) == (pytest.approx(low, rel=1e-15), pytest.approx(high, rel=1e-15), "percent")


def test_all_tolerance_letters_enclose_zero() -> None:
    assert set(TOLERANCES) == set("ELPWBCDFGHJKMNQTSZ")
    assert all(low < 0 < high for low, high in TOLERANCES.values())


def test_capital_k_after_k_is_ten_percent_and_m_after_m_twenty() -> None:
    assert read_quantity("4M7M", "ohm", HERE).high == pytest.approx(5.64e6, rel=1e-15)
    assert read_quantity("47K", "ohm", HERE).spread == "none"


@pytest.mark.parametrize(
    ("text", "unit", "words"),
    [
        ("4n7F", "F", "unit or a tolerance letter"), ("4n7H", "F", "unit or a tolerance letter"),
        ("4u7H", "H", "unit or a tolerance letter"), ("4u7F", "H", "unit or a tolerance letter"),
        ("47kJ", "ohm", "no tolerance letter"), ("470RJ", "ohm", "no tolerance letter"),
        ("4k7A", "ohm", "no tolerance letter"), ("330L", "ohm", "milliohm"), ("4L7", "ohm", "milliohm"),
        ("4p7C", "F", "picofarads"), ("1p0B", "F", "picofarads"),
    ],
)  # fmt: skip
def test_codes_that_can_be_misread(text: str, unit: str, words: str) -> None:
    with pytest.raises(InputError, match=words):
        read_quantity(text, unit, HERE)


def test_small_capacitors_take_letters_that_are_percent_there() -> None:
    assert read_quantity("4p7K", "F", HERE).high == pytest.approx(5.17e-12)
    assert read_quantity("47p0C", "F", HERE).high == pytest.approx(47.1175e-12)


def test_shape_of_a_code_that_starts_with_its_letter() -> None:
    assert looks_coded("R047")
    assert looks_coded("R47J")
    assert not looks_coded("R")
    assert not looks_coded("open")
    assert not looks_coded("47R")
    assert set(LETTERS) == {"ohm", "F", "H"}
