"""One number with its unit: digits, SI prefix, unit, or a value code."""

from __future__ import annotations

import re
import sys
from dataclasses import dataclass
from decimal import Decimal

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.code import LETTERS, read_code
from netaudit.quantities.hints import explain
from netaudit.quantities.text import LONGEST, shown
from netaudit.quantities.units import FORMS, PREFIXES

_NUMBER = re.compile(r"([+-]?[0-9]+(?:\.[0-9]+)?)(?:e([+-]?[0-9]+))?(.*)", re.DOTALL)
_ZERO_CELSIUS = Decimal("273.15")


@dataclass(frozen=True, slots=True)
class Scalar:
    """A number in SI; ``complete`` when a prefix, unit or code letter stood with it; a code's tolerance in percent."""

    value: float
    complete: bool
    tolerance: tuple[float, float] | None = None


def split_number(text: str) -> tuple[str, str, str] | None:
    """(mantissa, exponent, rest) of a text that starts with a number, else None."""
    match = _NUMBER.fullmatch(text)
    return None if match is None else (match[1], match[2] or "0", match[3])


def read_scalar(text: str, unit: str, place: Place, *, code: bool = False) -> Scalar:
    """One number of the canonical unit, converted to SI (a temperature in K to degC).

    ``code`` allows value codes.  Raises InputError with the mistake named.
    """
    if len(text) > LONGEST:
        raise InputError(f"{shown(text)} is too long for a number", place=place, mend="at most 1000 characters")
    parts = split_number(text)
    if parts is not None:
        mantissa, exponent, rest = parts
        if unit == "degC" and rest == "K":
            return Scalar(_from_kelvin(_scaled(text, mantissa, exponent, 0, place), mantissa, exponent, place), True)
        scale = 0 if not rest and unit != "degC" else FORMS[unit].get(rest)
        if scale is None and unit != "degC" and unit != "K":
            scale = PREFIXES.get(rest)
        if scale is not None:
            value = _scaled(text, mantissa, exponent, scale, place)
            if unit == "degC" and value < -273.15:
                raise _too_cold(text, place)
            return Scalar(value, bool(rest))
    coded = read_code(text, unit, place) if code and unit in LETTERS else None
    if coded is not None:
        _finite(text, coded.value, text, place)
        return Scalar(coded.value, True, coded.tolerance)
    raise explain(text, unit, place)


def _scaled(text: str, mantissa: str, exponent: str, scale: int, place: Place) -> float:
    """The decimal text times a power of ten, rounded once."""
    value = float(f"{mantissa}e{int(exponent) + scale}")
    _finite(text, value, mantissa, place)
    return value


def _finite(text: str, value: float, mantissa: str, place: Place) -> None:
    """Refuses what a double cannot hold: overflow, and a value that would silently become zero or lose digits."""
    if value in (float("inf"), float("-inf")):
        raise InputError(f"{shown(text)} is not finite: too large for a number", place=place, mend="check the exponent")
    if abs(value) < sys.float_info.min and re.search("[1-9]", mantissa):
        raise InputError(f"{shown(text)} is too small for a number", place=place, mend="write 0, or check the exponent")


def _from_kelvin(kelvin: float, mantissa: str, exponent: str, place: Place) -> float:
    """An absolute temperature in degC, subtracted in decimal so that 298.15K is 25degC and not a neighbour of it."""
    if kelvin < 0.0:
        raise _too_cold(f"{kelvin:g}K", place)
    return float(Decimal(f"{mantissa}e{exponent}") - _ZERO_CELSIUS)


def _too_cold(text: str, place: Place) -> InputError:
    return InputError(f"{shown(text)} lies below absolute zero", place=place, mend="0 K is -273.15degC")
