"""Measured curves: a CSV from the bench to voltages and currents, whatever its separators, units and order.

Two columns (voltage, current) with units in the heading or given; several currents side by side, one a temperature; or
the sweep of a supply behind a known series resistor (supply voltage and device voltage, the current is their difference
over R).  Comments begin with #, % or //.
"""

from __future__ import annotations

import csv
import io
import math
import re
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from netaudit.failure import InputError
from netaudit.place import Place

Array = NDArray[np.float64]
_NUMBER = re.compile(r"^[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?$")
_PREFIX = {"f": 1e-15, "p": 1e-12, "n": 1e-9, "u": 1e-6, "µ": 1e-6, "μ": 1e-6, "m": 1e-3, "": 1.0, "k": 1e3}
_UNIT = re.compile(r"(?:^|[\s\[(/_,])(?P<prefix>[fpnuµμmk]?)(?P<unit>[VA])(?:$|[\s\])_,@])")
#: characters from which on a file of numbers is read at once
_LONG = 20_000
_WORDS = (("milli", "m"), ("micro", "u"), ("nano", "n"), ("pico", "p"), ("kilo", "k"))
#: a row of units alone, below the row of names
_ALONE = re.compile(r"^[\[(]?[fpnuµμmk]?[VvAa][\])]?$")
_TEMPERATURE = re.compile(r"(?P<t>[+-]?\d+(?:[.,]\d+)?)\s*(?:deg\s*C|°\s*C|℃|C\b)")


@dataclass(frozen=True)
class Curve:
    """One measured curve: volts and amperes in the order of the file, the temperature in degC (None: not stated), and
    the line of each point."""

    v: Array
    i: Array
    temperature: float | None
    lines: tuple[int, ...]


@dataclass(frozen=True)
class Layout:
    """What the caller knows about the columns: unit of voltage and current where the heading has none, the series
    resistance in ohms of a supply sweep, and whether the first column is the current."""

    voltage_unit: str = ""
    current_unit: str = ""
    series: float | None = None
    current_first: bool = False


@dataclass(frozen=True)
class _Line:
    cells: list[str]
    number: int


def read_curves(data: bytes, file: str, layout: Layout | None = None) -> tuple[Curve, ...]:
    """The curves of a file.  Raises InputError with a line for text in a number, fewer than two points, no columns."""
    layout = layout or Layout()
    text = _decoded(data)
    if "\0" in text:
        raise InputError("this is not a text file", place=Place(file, 1), mend="export the curve as CSV")
    quick = _bulk(text)
    lines = quick[0] if quick is not None else _split(text)
    if not lines:
        raise InputError("there are no points in the file", place=Place(file, 1), mend="two columns: voltage, current")
    heading, rows = _headed(lines)
    table, numbers = _numbers(rows, file) if quick is None else quick[1:]
    columns = _columns(heading, table.shape[1], layout, file)
    curves = _curves(table, numbers, columns, layout)
    for curve in curves:
        if len(curve.v) < 2:
            raise InputError(
                f"a curve of {len(curve.v)} point(s)", place=Place(file, lines[0].number), mend="two at least"
            )
    return curves


def _bulk(text: str) -> tuple[list[_Line], Array, list[int]] | None:
    """Heading and first row, numbers and their lines of a long file of plain numbers; None for any other file."""
    if len(text) < _LONG or text.count("\n") < 1000:
        return None
    top = text[:_LONG].rpartition("\n")[0]
    lines = _split(top)
    first = next((k for k, line in enumerate(lines) if _numeric(line.cells)), len(lines))
    if first == len(lines):
        return None
    number = lines[first].number
    body = text.split("\n", number - 1)[-1]
    separator = _separator([line for line in top.split("\n")[number:] if line.strip()])
    if re.search(r"[#%/\"nN]", body):
        return None
    if separator != ",":
        body = body.replace(",", ".")
    try:
        table = np.loadtxt(io.StringIO(body), delimiter=None if separator == " " else separator, comments=None, ndmin=2)
    except ValueError:
        return None
    if not np.isfinite(table).all():
        return None
    return lines[: first + 1], table, list(range(number, number + len(table)))


def _decoded(data: bytes) -> str:
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        return data.decode("utf-16", errors="replace")
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError:
        return data.decode("latin-1")


def _headed(lines: list[_Line]) -> tuple[_Line | None, list[_Line]]:
    """The heading and the rows below it: the last line before the numbers that names a voltage and something beside it
    (instruments write remarks above it), else the first; a row of units below the names belongs to them."""
    first = next((k for k, line in enumerate(lines[:200]) if _numeric(line.cells)), len(lines))
    if first == 0:
        return None, lines
    at = next((k for k in reversed(range(min(first, len(lines), 200))) if _names(lines[k].cells)), 0)
    heading, rows = lines[at], lines[at + 1 :]
    if rows and any(rows[0].cells) and all(_ALONE.match(c) for c in rows[0].cells if c):
        units = [*rows[0].cells, *[""] * len(heading.cells)]
        cells = [
            f"{name} [{unit.strip('[]()')}]" if unit else name for name, unit in zip(heading.cells, units, strict=False)
        ]
        return _Line(cells, heading.number), rows[1:]
    return heading, rows


def _names(cells: Sequence[str]) -> bool:
    """Whether a row names two columns at least; units alone are no names."""
    if any(re.match(r"[+-]?[.0-9]", c) for c in cells) or all(_ALONE.match(c) for c in cells):
        return False
    return sum(_column(c, Layout()) is not None for c in cells) >= 2


def _split(text: str) -> list[_Line]:
    """Rows of cells without comments and empty rows; the separator is the one that the rows agree on."""
    rows = []
    for number, raw in enumerate(text.splitlines(), start=1):
        body = re.split(r"#|%|//", raw, maxsplit=1)[0].strip()
        if body:
            rows.append((body, number))
    separator = _separator([body for body, _ in rows])
    out = []
    for body, number in rows:
        cells = [c.strip() for c in _cells(body, separator)]
        while cells and not cells[-1]:
            cells.pop()
        if separator != ",":
            cells = [re.sub(r"(?<=\d),(?=\d)", ".", c) for c in cells]
        out.append(_Line(cells, number))
    return out


def _cells(body: str, separator: str) -> list[str]:
    if separator == " ":
        return re.split(r"\s+", body)
    if '"' not in body:
        return body.split(separator)
    cells = [c.strip() for c in next(csv.reader([body], delimiter=separator))]
    # a quoted cell may hold a decimal comma beside separators that are commas
    return [re.sub(r"^([+-]?[0-9]+),([0-9]+(?:[eE][+-]?[0-9]+)?)$", r"\1.\2", c) for c in cells]


def _separator(rows: Sequence[str]) -> str:
    sample = rows[-min(len(rows), 20) :]
    for candidate in (";", "\t", "|"):
        if sample and all(candidate in row for row in sample):
            return candidate
    # blanks between numbers with decimal commas, or plain commas
    if sample and all(re.search(r"\d\s+[+\-.\d]", row) for row in sample):
        return " "
    return ","


def _numeric(cells: Sequence[str]) -> bool:
    return all(_NUMBER.match(c) for c in cells if c)


def _numbers(rows: Sequence[_Line], file: str) -> tuple[Array, list[int]]:
    width = max((len(r.cells) for r in rows), default=0)
    if width < 2:
        raise InputError(
            "one column only" if rows else "a heading and no points",
            place=Place(file, rows[0].number if rows else 1),
            mend="two columns: voltage and current",
        )
    table = np.full((len(rows), width), math.nan)
    for k, row in enumerate(rows):
        for c, cell in enumerate(row.cells):
            if not cell:
                continue
            if not _NUMBER.match(cell):
                raise InputError(
                    f"{cell[:40]!r} is not a number",
                    place=Place(file, row.number),
                    mend="one number a cell, its unit in the heading",
                )
            table[k, c] = float(cell)
            if math.isinf(table[k, c]):
                raise InputError(f"{cell[:40]} is too large", place=Place(file, row.number), mend="check the exponent")
    return table, [r.number for r in rows]


@dataclass(frozen=True)
class _Column:
    role: str  # "voltage", "current", "supply"
    scale: float
    temperature: float | None


def _columns(heading: _Line | None, width: int, layout: Layout, file: str) -> list[_Column | None]:
    """What each column holds."""
    cells = heading.cells if heading is not None else []
    cells = [*cells, *[""] * (width - len(cells))]
    found = [_column(cell, layout) for cell in cells]
    named = sum(c is not None for c in found)
    if not any(c is not None and c.role != "voltage" for c in found) and (named < 2 or layout.series is not None):
        roles = ["supply", "voltage"] if layout.series is not None else ["voltage"]
        if layout.current_first and layout.series is None:
            roles = ["current", "voltage"]
        names = roles + ["current"] * (width - len(roles)) if layout.series is None else roles
        found = [
            _Column(role, _scale(cell, role, layout), _temperature(cell))
            for role, cell in zip(names, cells, strict=False)
        ]
    roles = [c.role for c in found if c is not None]
    if "voltage" not in roles or not ({"current", "supply"} & set(roles)):
        raise InputError(
            "the columns voltage and current cannot be told apart",
            place=Place(file, heading.number if heading is not None else 1),
            mend="name them voltage and current, with units",
        )
    if "supply" in roles and layout.series is None:
        raise InputError(
            "a sweep of a supply needs its series resistance", place=Place(file, 1), mend="give it: --series 1kohm"
        )
    return list(found)


def _column(cell: str, layout: Layout) -> _Column | None:
    """The role that a heading names, None when it names none."""
    word = cell.strip().casefold()
    if re.match(r"v_?s\b|v_?supply|supply|source", word):
        role = "supply"
    elif re.match(r"v|u(?:\b|_)|volt", word):
        role = "voltage"
    elif re.match(r"i(?:\b|_|f\b|d\b)|curr|amp", word):
        role = "current"
    else:
        match = _UNIT.search(cell)
        if match is None:
            return None
        role = "voltage" if match["unit"] == "V" else "current"
    return _Column(role, _scale(cell, role, layout), _temperature(cell))


def _scale(cell: str, role: str, layout: Layout) -> float:
    letter = "A" if role == "current" else "V"
    # "V (mV)": the symbol of the quantity may look like a unit, so the last one counts
    stated = [m["prefix"] for m in _UNIT.finditer(cell.replace("(", " (")) if m["unit"] == letter]
    # "milliamps", and "(ua)" in brackets whatever the case
    stated += [prefix for word, prefix in _WORDS if re.search(rf"{word}\s*(?:amp|volt)", cell, re.IGNORECASE)]
    stated += re.findall(rf"[\[(/]\s*([fpnuµμmk]){letter.lower()}\s*[\])]?$", cell)
    if stated:
        return _PREFIX[stated[-1]]
    unit = layout.current_unit if role == "current" else layout.voltage_unit
    return _PREFIX.get(unit.removesuffix(letter), 1.0) if unit else 1.0


def _temperature(cell: str) -> float | None:
    match = _TEMPERATURE.search(cell)
    return float(match["t"].replace(",", ".")) if match else None


def _curves(
    table: Array, numbers: Sequence[int], columns: Sequence[_Column | None], layout: Layout
) -> tuple[Curve, ...]:
    voltages = [k for k, c in enumerate(columns) if c is not None and c.role == "voltage"]
    supplies = [k for k, c in enumerate(columns) if c is not None and c.role == "supply"]
    currents = [k for k, c in enumerate(columns) if c is not None and c.role == "current"]
    out = []
    if supplies and layout.series is not None and not currents:
        for k, s in enumerate(supplies):
            d = voltages[min(k, len(voltages) - 1)]
            v = table[:, d] * _of(columns, d).scale
            i = (table[:, s] * _of(columns, s).scale - v) / layout.series
            out.append(_curve(v, i, numbers, _of(columns, s).temperature or _of(columns, d).temperature))
        return tuple(out)
    for k, c in enumerate(currents):
        before = [v for v in voltages if v < c]
        d = voltages[k] if len(voltages) == len(currents) else (before[-1] if before else voltages[0])
        v = table[:, d] * _of(columns, d).scale
        i = table[:, c] * _of(columns, c).scale
        stated = _of(columns, c).temperature
        out.append(_curve(v, i, numbers, stated if stated is not None else _of(columns, d).temperature))
    return tuple(out)


def _of(columns: Sequence[_Column | None], k: int) -> _Column:
    column = columns[k]
    if column is None:
        raise IndexError(k)
    return column


def _curve(v: Array, i: Array, numbers: Sequence[int], temperature: float | None) -> Curve:
    good = np.isfinite(v) & np.isfinite(i)
    return Curve(v[good], i[good], temperature, tuple(n for n, g in zip(numbers, good, strict=True) if g))
