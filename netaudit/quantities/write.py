"""Quantities to text: in the language (print then parse is identity), and rounded for people."""

from __future__ import annotations

import math
import struct
from collections.abc import Callable

from netaudit.quantities.quantity import Quantity
from netaudit.quantities.units import PREFIX_OF, UNITS, written


def write_number(value: float, unit: str) -> str:
    """A finite SI number in the language, exact: ``read_number(write_number(x, u), u, place) == x``."""
    return f"{_digits(value)}{written(unit)}"


def write_quantity(q: Quantity) -> str:
    """The quantity as a key's value: ``5.1V,5%``, ``0.5,0.2..0.8``, ``2.5V,±0.025V``.

    Reads back to the same record.  A span that no symmetric or percentage tolerance gives (records joined by hand) is
    written as a range: the numbers stay, ``spread`` becomes ``range``.
    """
    nominal = write_number(q.nominal, q.unit)
    if q.spread == "none":
        return nominal
    span = _percent(q) if q.spread == "percent" else _absolute(q) if q.spread == "absolute" else None
    if span is None:
        span = f"{write_number(q.low, q.unit)}..{write_number(q.high, q.unit)}"
    return f"{nominal},{span}"


def engineering(value: float, unit: str, digits: int = 3) -> str:
    """A number for people: ``1.44 W``, ``12.3 mA``, ``4.7 kohm``, ``85 degC``, ``50 ppm/K``.

    ``digits`` significant digits without trailing zeros; digits before the point are never dropped from temperatures
    and plain numbers.
    """
    people = UNITS[unit].people
    if people is not None:
        form, exponent = people
        scaled = value / 10.0**exponent if exponent else value
        return f"{_rounded(scaled, max(digits, _whole(scaled)))} {form}".rstrip()
    if not math.isfinite(value) or value == 0.0:
        return f"{_rounded(value, digits)} {unit}"
    exponent = 3 * math.floor(math.floor(math.log10(abs(float(f"{value:.{digits - 1}e}")))) / 3)
    if exponent not in PREFIX_OF:
        return f"{_rounded(value, digits)} {unit}"
    # dividing by the exact power of ten keeps 4.7e-6 at 4.7
    scaled = value / 10.0**exponent if exponent >= 0 else value * 10.0**-exponent
    return f"{_rounded(scaled, digits)} {PREFIX_OF[exponent]}{unit}"


def _whole(value: float) -> int:
    """Digits before the point."""
    return 0 if not math.isfinite(value) or abs(value) >= 1e15 else len(str(abs(int(value))))


def _rounded(value: float, digits: int) -> str:
    text = f"{value + 0.0:.{digits}g}"
    mantissa, e, exponent = text.partition("e")
    if e and 0 < int(exponent) < 6:
        return f"{float(text):.0f}"
    return "0" if text == "-0" else mantissa + e + exponent


def _digits(value: float) -> str:
    """The shortest decimal text of a double, without ``.0``."""
    return repr(float(value)).removesuffix(".0")


def _percent(q: Quantity) -> str | None:
    """``5%`` or ``-20%..+80%``."""
    if q.nominal == 0.0:
        return "0%" if q.low == q.high == 0.0 else None
    size = abs(q.nominal)
    near, far = (q.high, q.low) if q.nominal < 0.0 else (q.low, q.high)
    # the same arithmetic as reading: nominal (100 + p) / 100
    below = _preimage(lambda p: min(size * (100.0 - p) / 100.0, size), abs(near), rising=False)
    above = _preimage(lambda p: max(size * (100.0 + p) / 100.0, size), abs(far), rising=True)
    if below is None or above is None or (q.low < 0.0 < q.high):
        return None
    both = max(below[0], above[0]), min(below[1], above[1])
    if both[0] <= both[1]:
        return f"{_shortest(*both)}%"
    low, high = _shortest(*below), _shortest(*above)
    return f"-{low}%..+{high}%"


def _absolute(q: Quantity) -> str | None:
    """``±25mV`` in SI units; a temperature's half-width is in K."""
    below = _preimage(lambda d: -(q.nominal - d), -q.low, rising=True)
    above = _preimage(lambda d: q.nominal + d, q.high, rising=True)
    if below is None or above is None:
        return None
    both = max(below[0], above[0]), min(below[1], above[1])
    if both[0] > both[1]:
        return None
    return f"±{_shortest(*both)}{written('K' if q.unit == 'degC' else q.unit)}"


def _preimage(f: Callable[[float], float], target: float, *, rising: bool) -> tuple[float, float] | None:
    """The first and the last double x >= 0 with f(x) == target for a monotone f; None when there is none."""
    sign = 1.0 if rising else -1.0
    first = _bisect(lambda x: sign * f(x) >= sign * target)
    last = _bisect(lambda x: sign * f(x) > sign * target) - 1
    if first > last:
        return None
    return _double(first), _double(last)


def _bisect(reached: Callable[[float], bool]) -> int:
    """The ordinal (bit pattern) of the least non-negative double for which a monotone condition holds."""
    low, high = 0, 0x7FF0000000000000
    while low < high:
        middle = (low + high) // 2
        if reached(_double(middle)):
            high = middle
        else:
            low = middle + 1
    return low


def _double(ordinal: int) -> float:
    return float(struct.unpack("<d", struct.pack("<q", ordinal))[0])


def _shortest(low: float, high: float) -> str:
    """The shortest decimal text whose double lies in [low, high]."""
    if low == 0.0:
        return "0"
    middle = low + 0.5 * (high - low)
    for digits in range(1, 18):
        x = float(f"{middle:.{digits}g}")
        if low <= x <= high:
            return _digits(x)
    return _digits(low)
