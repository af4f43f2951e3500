"""Tolerances between specimens: percentages (``5%``, ``-20%..+80%``) and absolute ones (``±25mV``)."""

from __future__ import annotations

import math
import re

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.number import read_scalar
from netaudit.quantities.quantity import Spread
from netaudit.quantities.text import shown

_PLUS_MINUS = ("±", "+-")


def read_tolerance(text: str, nominal: float, unit: str, place: Place) -> tuple[float, float, Spread]:
    """(low, high, ``percent`` or ``absolute``) that a tolerance leaves around a nominal value (SI; degC for ``degC``).

    A percentage p means nominal (100 - p) / 100 and nominal (100 + p) / 100, in rising order for a negative nominal.
    Raises InputError for a text that is no tolerance, and for the percentage of a temperature in degC.
    """
    sides = percent_limits(text, place)
    if sides is not None:
        if unit == "degC":
            raise InputError(
                f"{shown(text)}: a percentage of a temperature in degC means nothing",
                place=place,
                mend="write it in kelvin, as in ±2K",
            )
        return (*percent_span(nominal, *sides, text, place), "percent")
    if not text.startswith(_PLUS_MINUS):
        raise InputError(f"{shown(text)} is not a tolerance", place=place, mend="as in 5%, -20%..+80% or ±25mV")
    half = absolute_half(text, unit, place)
    return (*_ordered(nominal - half, nominal + half, text, place), "absolute")


def absolute_half(text: str, unit: str, place: Place) -> float:
    """The half-width of ``±25mV`` in SI units (kelvin for a temperature), zero or more."""
    body = text.removeprefix("±") if text.startswith("±") else text.removeprefix("+-")
    if body[:1] in ("+", "-"):
        raise InputError(f"{shown(text)} has a sign after ±", place=place, mend="write it without that sign")
    return read_scalar(body, "K" if unit == "degC" else unit, place).value


def percent_limits(text: str, place: Place) -> tuple[float, float] | None:
    """The limits of a percentage tolerance in percent, below <= 0 <= above; None when the text is not in percent."""
    if "%" not in text or not text.endswith("%"):
        return None
    if ".." in text:
        return _two_sides(text, place)
    body = text
    for sign in _PLUS_MINUS:
        body = body.removeprefix(sign)
    percent = _percent(body, text, place)
    if body[0] in "+-" or percent < 0:
        raise InputError(
            f"{shown(text)}: a tolerance of both sides has no sign",
            place=place,
            mend=f"write {body.lstrip('+-')} for both sides, or both ends as in -20%..+80%",
        )
    return -percent, percent


def _two_sides(text: str, place: Place) -> tuple[float, float]:
    left, _, right = text.partition("..")
    low, high = _percent(left, text, place), _percent(right, text, place)
    signed = (left.startswith("-") or low == 0) and (right.startswith("+") or high == 0)
    if not signed or (low == 0 and high == 0):
        raise InputError(
            f"{shown(text)} is not a tolerance: its ends need their signs",
            place=place,
            mend="write the end below with - and the end above with +, as in -20%..+80%",
        )
    return low, high


def _percent(body: str, text: str, place: Place) -> float:
    """The number before the percent sign."""
    if not re.fullmatch(r"[+-]?[0-9].*%", body, re.DOTALL):
        raise InputError(f"{shown(text)} is not a tolerance", place=place, mend="as in 5% or -20%..+80%")
    return read_scalar(body[:-1], "1", place).value


def percent_span(nominal: float, below: float, above: float, text: str, place: Place) -> tuple[float, float]:
    """The span of a percentage tolerance; refuses more than 100 % below, which would turn the sign."""
    if below < -100.0:
        raise InputError(
            f"{shown(text)} reaches more than 100 % below the nominal value",
            place=place,
            mend="write both ends, as in -50%..+200%",
        )
    ends = nominal * (100.0 + below) / 100.0, nominal * (100.0 + above) / 100.0
    # a product may round to the other side of the nominal when the percentage is next to nothing
    return _ordered(min(*ends, nominal), max(*ends, nominal), text, place)


def _ordered(low: float, high: float, text: str, place: Place) -> tuple[float, float]:
    if not (math.isfinite(low) and math.isfinite(high)):
        raise InputError(f"{shown(text)} leaves the range of numbers", place=place, mend="check value and tolerance")
    return low, high
