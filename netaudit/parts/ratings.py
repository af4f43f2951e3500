"""Ratings: a number, a text with its unit, or pairs that fall with temperature; only what is physical."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

from netaudit.failure import InputError
from netaudit.parts.names import RATINGS, Symbol
from netaudit.parts.part import Rating
from netaudit.parts.values import listed, physical, written
from netaudit.place import Place
from netaudit.quantities.quantity import exact
from netaudit.quantities.read import read_at, read_number

_PLUS_MINUS = ("±", "+-")


def read_rating(symbol: str, value: Any, place: Place, origin: str = "", generic: bool = False) -> Rating:
    """A rating: a number in SI, ``"25mA"``, or pairs ``["25mA @ 25degC", "0mA @ 100degC"]``.

    Raises InputError for a value that no part can have, and for two values at one temperature.
    """
    known = RATINGS[symbol]
    texts = listed(value, place)
    if len(texts) == 1 and "@" not in texts[0]:
        return Rating(symbol, ((math.nan, _number(texts[0], known, place)),), origin, generic)
    pairs = []
    for text in texts:
        left, sign, _ = text.partition("@")
        if not sign:
            raise InputError(f"{text!r} lacks its temperature", place=place, mend='write it like "25mA @ 25degC"')
        _, condition = read_at(text.replace("±", "").replace("+-", ""), known.unit, known.at or "degC", place)
        assert condition is not None
        pairs.append((condition.nominal, _number(left.strip(), known, place)))
    pairs.sort()
    for (t0, a), (t1, b) in pairwise(pairs):
        if t0 == t1:
            raise InputError(f"two values, {a:g} and {b:g}, at {t0:g} degC", place=place, mend="keep one of them")
    return Rating(symbol, tuple(pairs), origin, generic)


def inline_rating(symbol: str, text: str, place: Place) -> Rating:
    """A rating written on a device line."""
    try:
        return read_rating(symbol, text, place, f"{place.file}:{place.line}")
    except InputError as error:
        raise InputError(f"{symbol}: {error.what}", place=error.place, mend=error.mend) from None


def _number(text: str, known: Symbol, place: Place) -> float:
    """The rated value; a data sheet's sign of a p-type part, or both signs, are its size."""
    body = text
    if known.sign == "magnitude":
        for sign in _PLUS_MINUS:
            body = body.removeprefix(sign)
    number = read_number(body, known.unit, place)
    if known.sign == "magnitude":
        return abs(number)
    wrong = physical(known, exact(number, known.unit))
    if wrong:
        raise InputError(f"{written(text)} {wrong}", place=place, mend=f"it is the {known.text}")
    return number
