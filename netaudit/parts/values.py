"""Values of a part row: what TOML or CSV holds to texts, texts to quantities, and only what is physical."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from netaudit.failure import InputError
from netaudit.parts.names import PARAMETERS, Symbol
from netaudit.parts.row import described
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity
from netaudit.quantities.read import classify, read_at, read_number, read_quantity, read_span
from netaudit.quantities.text import shown
from netaudit.quantities.tolerance import read_tolerance
from netaudit.quantities.units import UNITS


def text_of(value: Any, place: Place) -> str:
    """A text or a number as the text that is read as a value.  Raises InputError for anything else."""
    if isinstance(value, str):
        if not value.strip():
            raise InputError("it is empty", place=place, mend="write its value, or remove the key")
        return value.strip()
    if isinstance(value, (int, float)) and not isinstance(value, bool):
        if isinstance(value, int) and abs(value) > 10**300:
            raise InputError("it is too large for a number", place=place, mend="check the digits")
        if not math.isfinite(value):
            raise InputError(f"{value} is no value", place=place, mend="leave out what is not known or not limited")
        return repr(value)
    raise InputError(f"it is {described(value)}, not a value", place=place, mend='write it like "25mA"')


def listed(value: Any, place: Place) -> list[str]:
    """A list of texts: from a list, or from one text whose points part by ``;``."""
    if isinstance(value, str):
        value = [piece for piece in value.split(";") if piece.strip()]
    elif not isinstance(value, list):
        value = [value]
    if not value:
        raise InputError("it is empty", place=place, mend="write its value, or remove the key")
    return [text_of(v, place) for v in value]


def written(text: str) -> str:
    """The text for a message."""
    return shown(text)


def physical(symbol: Symbol, quantity: Quantity) -> str:
    """What is impossible about a value, empty when it is possible."""
    if symbol.sign == "positive" and quantity.low <= 0.0:
        return "must be above zero" if quantity.nominal <= 0.0 else "must be above zero over its whole spread"
    if symbol.sign == "not negative" and quantity.low < 0.0:
        return "cannot be negative" if quantity.nominal < 0.0 else "cannot be negative at the low end of its spread"
    if quantity.high > symbol.most:
        return f"cannot be above {symbol.most:g}" + (f" ({100 * symbol.most:g} %)" if symbol.unit == "1" else "")
    return ""


def read_parameter(key: str, value: Any, place: Place) -> dict[str, Quantity]:
    """A model parameter, with its condition under ``key.at``.  Raises InputError for what no part can have."""
    symbol = PARAMETERS[key]
    text = text_of(value, place)
    unit = unit_of(symbol, text)
    out: dict[str, Quantity] = {}
    if "@" in text:
        if not symbol.at:
            raise InputError(f"{shown(text)}: {key} has no condition", place=place, mend="leave out what follows @")
        quantity, condition = read_at(text, unit, symbol.at, place)
        if condition is not None:
            out[f"{key}.at"] = condition
    else:
        quantity = read_quantity(text, unit, place)
    wrong = physical(symbol, quantity)
    if wrong:
        raise InputError(f"{shown(text)} {wrong}", place=place, mend=f"it is the {symbol.text}")
    return {key: quantity, **out}


def unit_of(symbol: Symbol, text: str) -> str:
    """The unit that a value is written in, where its symbol allows several."""
    return next((u for u in symbol.alternatives if text.partition("@")[0].rstrip().endswith(u)), symbol.unit)


def pair(text: str, unit: str, at: str, place: Place) -> tuple[float, float]:
    """A point ``"0.65V @ 1mA"``."""
    left, sign, right = text.partition("@")
    if not sign:
        raise InputError(
            f"{text!r} is no point", place=place, mend=f"write it like {UNITS[unit].example} @ {UNITS[at].example}"
        )
    return read_number(left.strip(), unit, place), read_number(right.strip(), at, place)


def spread_of(key: str, value: Any, given: Mapping[str, Quantity], place: Place) -> Quantity:
    """The quantity with its specimens' spread: a half-width, a percentage, signed percentages, or its two ends."""
    symbol = PARAMETERS[key]
    text = text_of(value, place)
    nominal = 0.0 if key == "V_F" else given[key].nominal
    unit = unit_of(symbol, text) if key == "V_F" else given[key].unit
    shape = classify(text)
    if shape == "range":
        low, high = read_span(text, unit, place)
    elif shape == "tolerance":
        if key == "V_F" and text.endswith("%"):
            raise InputError(f"{shown(text)}: the spread of V_F is a voltage", place=place, mend='as in V_F = "0.15V"')
        low, high, _ = read_tolerance(text, nominal, unit, place)
    else:
        # the half-width of a temperature is a difference
        half = read_number(text, "K" if unit == "degC" else unit, place)
        if half < 0.0:
            raise InputError(f"{shown(text)}: a half-width is not negative", place=place, mend="leave out the minus")
        low, high = nominal - half, nominal + half
    if not low <= nominal <= high:
        raise InputError(
            f"{shown(text)} does not hold the value {nominal:g}",
            place=place,
            mend="write the half-width, a percentage, or both ends around the value",
        )
    return Quantity(nominal, unit, low, high, "absolute")
