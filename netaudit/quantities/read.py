"""Text to quantities: what a statement's items and a part table's cells mean once their unit is known.

Every function takes the text, the canonical unit (``netaudit.quantities.units``) and the place for its error, and
raises InputError.  Value codes (IEC 60062) are read wherever the unit is ohm, F or H; ``code=True`` also allows them
where the unit written decides what is meant (a load of A, W or ohm).
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Literal

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.code import LETTERS, looks_coded
from netaudit.quantities.number import Scalar, read_scalar, split_number
from netaudit.quantities.quantity import Quantity, Spread, exact
from netaudit.quantities.text import Token, shown
from netaudit.quantities.tolerance import percent_span, read_tolerance
from netaudit.quantities.units import FORMS, PREFIXES, UNITS

Shape = Literal["value", "range", "tolerance", "word"]


def classify(text: str) -> Shape:
    """What a bare item is, by its shape alone: a value, a range, a tolerance, or a word such as a switch's state."""
    if text.startswith(("±", "+-")):
        return "tolerance"
    if ".." in text:
        left, _, right = text.partition("..")
        return "tolerance" if left.endswith("%") and right.endswith("%") else "range"
    if text.endswith("%"):
        return "tolerance"
    if re.match(r"[+\-−–—]?\.?[0-9]", text) or looks_coded(text):
        return "value"
    return "word"


def read_number(text: str, unit: str, place: Place, *, code: bool = False) -> float:
    """One number in SI units (degC for ``degC``); a tolerance letter of a code is an error here."""
    return _plain(text, unit, place, code).value


def read_quantity(text: str, unit: str, place: Place, *, code: bool = False) -> Quantity:
    """``value``, ``value,tolerance``, ``value,low..high`` or ``low..high``.

    For the unit ``1`` a percentage before the comma, and a range of unsigned percentages, are values themselves.
    """
    first, comma, second = text.partition(",")
    if not comma:
        if ".." in first:
            return _of_range(None, first, unit, place, code)
        return _of_value(first, unit, place, code)
    if not first or not second or first != first.strip() or second != second.strip():
        raise InputError(f"{shown(text)}: a comma joins two texts without blanks", place=place, mend="as in 5.1V,5%")
    if ".." in first:
        raise InputError(f"{shown(text)}: a range stands after the value", place=place, mend="as in 0.5,0.2..0.8")
    if _is_range(second, unit):
        return _of_range(first, second, unit, place, code)
    if classify(second) != "tolerance":
        raise _no_span(text, first, second, place)
    return _with_tolerance(first, second, unit, place, code)


def read_span(
    text: str, unit: str, place: Place, *, one_sided: bool = False, code: bool = False
) -> tuple[float, float]:
    """``low..high`` in SI units; with ``one_sided`` also ``..high`` and ``low..``, the open end infinite."""
    left, dots, right = text.partition("..")
    if not dots:
        raise InputError(f"{shown(text)} is not a range", place=place, mend=f"write low..high, {_like(unit)}")
    if one_sided and bool(left) != bool(right):
        if left:
            return _plain(left, unit, place, code).value, float("inf")
        return float("-inf"), _plain(right, unit, place, code).value
    if not left or not right:
        raise InputError(f"{shown(text)} has no {'upper' if left else 'lower'} end", place=place, mend=_like(unit))
    low, high = _plain(left, unit, place, code), _plain(right, unit, place, code)
    if low.complete != high.complete:
        raise InputError(
            f"{shown(text)}: one end has a unit or prefix, the other has none",
            place=place,
            mend=f"write it at both ends, {_like(unit)}",
        )
    if low.value > high.value:
        raise InputError(
            f"{shown(text)} is reversed: the lower end comes first", place=place, mend=f"write {right}..{left}"[:100]
        )
    return low.value, high.value


def combine(
    value: Token | None,
    span: Token | None,
    tolerance: Token | None,
    units: Sequence[str],
    place: Place,
    *,
    code: bool = False,
) -> Quantity:
    """The quantity of a device statement's bare items, each a word or None; ``place`` is the statement's.

    With several ``units`` the unit written in the value (or in the range) decides.
    """
    lead = value or span
    if lead is None:
        what = "a tolerance stands without a value" if tolerance else "a value is missing"
        raise InputError(what, place=tolerance.place if tolerance else place, mend=f"write {_options(units)}")
    if span is not None and tolerance is not None:
        raise InputError(
            f"both a range ({shown(span.text)}) and a tolerance ({shown(tolerance.text)})",
            place=tolerance.place,
            mend="give one of them: a range is what the value does in operation, a tolerance the spread of specimens",
        )
    unit = _decide(lead, units, code)
    if span is not None:
        if value is not None:
            _check_bare(value)
        return _of_range(value.text if value else None, span.text, unit, span.place, code)
    _check_bare(lead)
    if tolerance is not None:
        return _with_tolerance(lead.text, tolerance.text, unit, lead.place, code, tolerance.place)
    return _of_value(lead.text, unit, lead.place, code)


def read_at(text: str, unit: str, at_unit: str, place: Place) -> tuple[Quantity, Quantity | None]:
    """``"100uA @ 40V"``: the value and its condition (None when none is stated)."""
    left, sign, right = text.partition("@")
    value = read_quantity(left.strip(), unit, place)
    if not sign:
        return value, None
    if not right.strip():
        raise InputError(f"{shown(text)}: nothing stands after @", place=place, mend=f"as in {_example(unit, at_unit)}")
    return value, read_quantity(right.strip(), at_unit, place)


def rescale(old: Quantity, nominal: float) -> Quantity:
    """The quantity with a new nominal: a percentage stays in proportion, another span is dropped."""
    if old.spread != "percent" or old.nominal == 0.0:
        return exact(nominal, old.unit)
    ends = sorted((nominal * (old.low / old.nominal), nominal * (old.high / old.nominal)))
    return Quantity(nominal, old.unit, min(ends[0], nominal), max(ends[1], nominal), "percent")


def _scalar(text: str, unit: str, place: Place, code: bool) -> Scalar:
    return read_scalar(text, unit, place, code=code or unit in LETTERS)


def _plain(text: str, unit: str, place: Place, code: bool) -> Scalar:
    """A number that may not carry a tolerance letter."""
    scalar = _scalar(text, unit, place, code)
    if scalar.tolerance is not None:
        raise InputError(
            f"{shown(text)}: a tolerance letter cannot stand here", place=place, mend="leave the letter out"
        )
    return scalar


def _of_value(text: str, unit: str, place: Place, code: bool) -> Quantity:
    scalar = _scalar(text, unit, place, code)
    if scalar.tolerance is None:
        return exact(scalar.value, unit)
    low, high = percent_span(scalar.value, *scalar.tolerance, text, place)
    return Quantity(scalar.value, unit, low, high, "percent")


def _with_tolerance(
    text: str, tolerance: str, unit: str, place: Place, code: bool, tolerance_place: Place | None = None
) -> Quantity:
    scalar = _scalar(text, unit, place, code)
    where = tolerance_place or place
    if scalar.tolerance is not None:
        raise InputError(
            f"two tolerances: the last letter of {shown(text)} and {shown(tolerance)}", place=where, mend="give one"
        )
    low, high, spread = read_tolerance(tolerance, scalar.value, unit, where)
    _above_zero_kelvin(low, tolerance, unit, where)
    return Quantity(scalar.value, unit, low, high, spread)


def _of_range(value: str | None, span: str, unit: str, place: Place, code: bool) -> Quantity:
    """A range with its nominal, or with the middle as nominal."""
    low, high = read_span(span, unit, place, code=code)
    if value is None:
        middle = min(max(0.5 * low + 0.5 * high, low), high)
        return Quantity(middle, unit, low, high, "range")
    scalar = _scalar(value, unit, place, code)
    if scalar.tolerance is not None:
        raise InputError(
            f"both a tolerance letter ({shown(value)}) and a range ({shown(span)})", place=place, mend="give one"
        )
    if not low <= scalar.value <= high:
        raise InputError(
            f"the value {shown(value)} lies outside its range {shown(span)}",
            place=place,
            mend="the range holds every value in operation, the stated one too",
        )
    spread: Spread = "range"
    return Quantity(scalar.value, unit, low, high, spread)


def _is_range(text: str, unit: str) -> bool:
    """A range rather than a tolerance: for the unit 1 also percentages without signs (``100%..200%``)."""
    if classify(text) == "range":
        return True
    return unit == "1" and ".." in text and text[0].isdigit() and text.partition("..")[2][:1].isdigit()


def _no_span(text: str, first: str, second: str, place: Place) -> InputError:
    if re.match(r"[0-9]+$", first.lstrip("+-")) and second[:1].isdigit():
        return InputError(
            f"{shown(text)} has a decimal comma", place=place, mend=f"write a point: {first}.{second}"[:100]
        )
    return InputError(
        f"{shown(text)}: after the comma stands a range or a tolerance", place=place, mend="as in 5.1V,5% or 5V,4V..6V"
    )


def _above_zero_kelvin(low: float, text: str, unit: str, place: Place) -> None:
    if unit == "degC" and low < -273.15:
        raise InputError(f"{shown(text)} reaches below absolute zero", place=place, mend="0 K is -273.15degC")


def _check_bare(word: Token) -> None:
    """A comma in a bare item: a decimal comma, or a tolerance that should stand apart."""
    first, comma, second = word.text.partition(",")
    if comma and not second:
        raise InputError(f"{shown(word.text)} ends with a comma", place=word.place, mend=f"write {first}"[:60])
    if comma and not re.match(r"[+-]?[0-9]+,[0-9]+[^0-9.%]*$", word.text):
        raise InputError(
            f"{shown(word.text)}: a comma joins only a key's value and its span",
            place=word.place,
            mend=f"write a blank instead: {first} {second}"[:100],
        )


def _decide(word: Token, units: Sequence[str], code: bool) -> str:
    """Which of the allowed units a word is written in."""
    if len(units) == 1:
        return units[0]
    text = word.text.partition("..")[0]
    parts = split_number(text)
    rest = parts[2] if parts else text
    for unit in units:
        if rest in FORMS[unit]:
            return unit
    if code and "ohm" in units and re.search(r"[RkKM][0-9]|R$|[0-9]K$", text):
        return "ohm"
    if parts and (not rest or rest in PREFIXES):
        raise InputError(
            f"{shown(word.text)} has no unit, which says what is meant",
            place=word.place,
            mend=f"write {_options(units)}",
        )
    if parts and rest:
        raise InputError(
            f"{shown(word.text)}: {shown(rest)} is not a unit that may stand here",
            place=word.place,
            mend=f"write {_options(units)}",
        )
    return units[0]


def _options(units: Sequence[str]) -> str:
    return " or ".join(f"{UNITS[u].meaning} ({UNITS[u].example})" for u in units)


def _like(unit: str) -> str:
    """An example of a range."""
    examples = {"degC": "-20degC..60degC", "1": "0.2..0.8", "ohm": "1k0..2k2", "A": "5mA..20mA", "V": "4.5V..5.5V"}
    example = UNITS[unit].example
    return f"as in {examples.get(unit, f'{example}..{example}')}"


def _example(unit: str, at_unit: str) -> str:
    return f'"{UNITS[unit].example} @ {UNITS[at_unit].example}"'
