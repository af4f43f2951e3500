"""Part tables: TOML (a table a part) and CSV (a row a part) to Parts; fitted when a board asks for them."""

from __future__ import annotations

import csv
import hashlib
import io
import math
import re
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path
from typing import Any

from netaudit.failure import InputError
from netaudit.parts.fit import fit_forward
from netaudit.parts.materials import material
from netaudit.parts.names import PARAMETERS, RATINGS, WORDS
from netaudit.parts.part import Part, Rating
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity, exact
from netaudit.quantities.read import read_at, read_number, read_quantity, read_span
from netaudit.syntax.suggest import closest

_OWN = frozenset({"kind", "block", "forward", "points", "pins", "spread", "source", "ratings", "generic", "name"})
_HEADING = re.compile(r"^\s*\[\s*(\"[^\"]+\"|'[^']+'|[^\]\s.]+)\s*\]")


@dataclass(frozen=True)
class PartTable:
    """Rows by part name, as read; ``overridden`` names parts that a later table replaced, with both places."""

    rows: Mapping[str, tuple[Mapping[str, Any], Place]] = field(default_factory=dict)
    files: Mapping[str, str] = field(default_factory=dict)
    overridden: tuple[str, ...] = ()
    _made: dict[str, Part] = field(default_factory=dict, compare=False, repr=False)

    def get(self, name: str) -> Part | None:
        """The part, its model worked out (once); None when no row has that name."""
        if name not in self._made and name in self.rows:
            row, place = self.rows[name]
            self._made[name] = make_part(name, row, place)
        return self._made.get(name)

    def merge(self, later: PartTable) -> PartTable:
        """Both tables; rows of the later one win."""
        again = tuple(
            f"part {name} of {self.rows[name][1].file} is replaced by the row in {later.rows[name][1].file}"
            for name in later.rows
            if name in self.rows
        )
        return PartTable(
            {**self.rows, **later.rows}, {**self.files, **later.files}, (*self.overridden, *later.overridden, *again)
        )


def read_table(path: str, named: str | None = None, place: Place | None = None) -> PartTable:
    """A table from a file; ``place`` is the statement that asked for it."""
    shown = named or path
    try:
        data = Path(path).read_bytes()
    except OSError as error:
        raise InputError(f"the part table {shown} cannot be read: {error.strerror}", place=place) from None
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data[: error.start].count(b"\n") + 1
        raise InputError("the part table is not UTF-8", place=Place(shown, line), mend="save it as UTF-8") from None
    rows = _csv_rows(text, shown) if shown.lower().endswith(".csv") else _toml_rows(text, shown)
    return PartTable(rows, {path: hashlib.sha256(data).hexdigest()})


@cache
def common_table() -> PartTable:
    """The generic classes that ship with netaudit (``parts common``)."""
    text = Path(__file__).with_name("common.toml").read_text(encoding="utf-8")
    return PartTable(_toml_rows(text, "parts common"))


def _toml_rows(text: str, file: str) -> dict[str, tuple[Mapping[str, Any], Place]]:
    try:
        data = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        match = re.search(r"line (\d+), column (\d+)", str(error))
        line, column = (int(match[1]), int(match[2])) if match else (len(text.splitlines()) or 1, 1)
        what = re.sub(r"\s*\(at .*\)$", "", str(error))
        raise InputError(f"not TOML: {what}", place=Place(file, line, column)) from None
    lines: dict[str, int] = {}
    for number, line_text in enumerate(text.splitlines(), start=1):
        match = _HEADING.match(line_text)
        if match:
            lines.setdefault(match[1].strip("\"'"), number)
    rows: dict[str, tuple[Mapping[str, Any], Place]] = {}
    for name, row in data.items():
        place = Place(file, lines.get(name, 1))
        if not isinstance(row, dict):
            raise InputError(f"{name} stands outside any part", place=place, mend="begin a part with [NAME]")
        rows[name] = (row, place)
    return rows


def _csv_rows(text: str, file: str) -> dict[str, tuple[Mapping[str, Any], Place]]:
    first = text.split("\n", 1)[0]
    separator = max(",;\t", key=first.count)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True)
    rows: dict[str, tuple[Mapping[str, Any], Place]] = {}
    heading: list[str] = []
    line = 1
    try:
        for cells in reader:
            place, line = Place(file, line), reader.line_num + 1
            if not any(c.strip() for c in cells):
                continue
            if not heading:
                heading = [c.strip() for c in cells]
                if "name" not in heading:
                    raise InputError("the table has no column name", place=place, mend="name one column name")
                continue
            row = _csv_row(heading, cells, place)
            name = str(row.get("name", ""))
            if not name:
                raise InputError("a row without a part name", place=place)
            if name in rows:
                raise InputError(f"part {name} stands twice in the table", place=place, mend="keep one row")
            rows[name] = (row, place)
    except csv.Error as error:
        raise InputError(f"not CSV: {error}", place=Place(file, line), mend="check the quotes") from None
    return rows


def _csv_row(heading: list[str], cells: list[str], place: Place) -> dict[str, Any]:
    if len(cells) > len(heading):
        raise InputError(f"{len(cells)} cells in a table of {len(heading)} columns", place=place)
    row: dict[str, Any] = {}
    for column, cell in zip(heading, cells, strict=False):
        text = cell.strip()
        if not text:
            continue
        if "." in column:
            group, key = column.split(".", 1)
            row.setdefault(group, {})[key] = text
        elif column in ("forward", "points") or ";" in text:
            row[column] = [p.strip() for p in text.split(";") if p.strip()]
        elif column in RATINGS and column not in PARAMETERS:
            row.setdefault("ratings", {})[column] = text
        else:
            row[column] = text
    return row


def make_part(name: str, row: Mapping[str, Any], place: Place) -> Part:
    """A row to a Part; InputError for what the row may not say."""
    _check_keys(name, row, place)
    kind = row.get("kind")
    words = {k: str(v) for k, v in row.items() if k in WORDS}
    parameters = _parameters(row, place)
    points = tuple(_pair(text, "V", "A", place) for text in _listed(row.get("points", ())))
    error: float | None = None
    rough = ""
    models = [
        m for m, given in (("forward", "forward" in row), ("points", bool(points)), ("I_S", "I_S" in row)) if given
    ]
    if len(models) > 1:
        raise InputError(f"part {name} has two models: {' and '.join(models)}", place=place, mend="keep one of them")
    known = material(words["material"], place) if "material" in words else None
    if "forward" in row:
        junction = fit_forward([_pair(t, "V", "A", place) for t in _listed(row["forward"])], known, place)
        parameters.update(I_S=exact(junction.I_S, "A"), n=exact(junction.n, "1"), R_S=exact(junction.R_S, "ohm"))
        error = junction.error
    generic = bool(row.get("generic", False))
    if generic:
        rough = f"{name} is a generic class ({row.get('source', 'no source stated')})"
    _spread(row.get("spread", {}), parameters, place)
    ratings, limits = _ratings(name, row, place, generic)
    for key, value in row.get("ratings", {}).items():
        # R_DS_on, V_GS_th and h_FE are listed among the ratings of a data sheet and are the model's as well
        if key in PARAMETERS and PARAMETERS[key].at and key not in parameters:
            parameters.update(read_parameter(key, value, place))
    return Part(
        name, kind, place, row.get("block"), parameters, words, points, ratings,
        {str(k): str(v) for k, v in row.get("pins", {}).items()}, limits, str(row.get("source", "")), error, rough, generic,
    )  # fmt: skip


def _check_keys(name: str, row: Mapping[str, Any], place: Place) -> None:
    for key in row:
        if key not in _OWN and key not in PARAMETERS and key not in RATINGS and key not in WORDS:
            near = closest(key, [*_OWN, *PARAMETERS, *RATINGS, *WORDS])
            mend = f"did you mean {near}?" if near else "see the README for the names"
            raise InputError(f"part {name}: unknown key {key}", place=place, mend=mend)


def _listed(value: Any) -> list[str]:
    return [str(v) for v in value] if isinstance(value, (list, tuple)) else [str(value)]


def _pair(text: str, unit: str, at: str, place: Place) -> tuple[float, float]:
    value, condition = read_at(text, unit, at, place)
    if condition is None:
        raise InputError(f"{text!r} is no point", place=place, mend=f"write it like 1.95{unit} @ 10m{at}")
    return value.nominal, condition.nominal


def _parameters(row: Mapping[str, Any], place: Place) -> dict[str, Quantity]:
    out: dict[str, Quantity] = {}
    for key, value in row.items():
        symbol = PARAMETERS.get(key)
        if symbol is None:
            continue
        out.update(read_parameter(key, value, place))
    return out


def read_parameter(key: str, value: Any, place: Place) -> dict[str, Quantity]:
    """A model parameter, with its condition under ``key.at``."""
    symbol = PARAMETERS[key]
    if isinstance(value, (int, float)) and not isinstance(value, bool):
        return {key: exact(float(value), symbol.unit)}
    text = str(value)
    unit = symbol.unit
    if key == "alpha_VZ" and re.search(r"V/K", text):
        unit = "V/K"
    if symbol.at and "@" in text:
        quantity, condition = read_at(text, unit, symbol.at, place)
        return {key: quantity} if condition is None else {key: quantity, f"{key}.at": condition}
    return {key: read_quantity(text, unit, place)}


def _spread(spread: Mapping[str, Any], parameters: dict[str, Quantity], place: Place) -> None:
    for key, value in spread.items():
        if key not in PARAMETERS:
            near = closest(key, list(PARAMETERS))
            raise InputError(
                f"spread of an unknown value {key}", place=place, mend=f"did you mean {near}?" if near else ""
            )
        text = str(value)
        unit = PARAMETERS[key].unit
        nominal = parameters[key].nominal if key in parameters else 0.0
        if ".." in text and not text.rstrip().endswith("%"):
            low, high = read_span(text, unit, place)
        elif text.rstrip().endswith("%"):
            q = read_quantity(f"{nominal!r},{text}", unit, place)
            low, high = q.low, q.high
        else:
            half = abs(read_number(text.lstrip("±").removeprefix("+-"), unit, place))
            low, high = nominal - half, nominal + half
        parameters[key] = Quantity(nominal, unit, low, high, "absolute")


def _ratings(
    name: str, row: Mapping[str, Any], place: Place, generic: bool
) -> tuple[dict[str, Rating], dict[str, tuple[float, float]]]:
    ratings: dict[str, Rating] = {}
    limits: dict[str, tuple[float, float]] = {}
    given = dict(row.get("ratings", {}))
    for key, value in row.items():
        if key in RATINGS and key not in given:
            given[key] = value
    for key, value in given.items():
        if key == "pins":
            limits = {str(pin): read_span(str(text), "V", place) for pin, text in value.items()}
            continue
        if key not in RATINGS:
            near = closest(key, list(RATINGS))
            raise InputError(
                f"part {name}: unknown rating {key}", place=place, mend=f"did you mean {near}?" if near else ""
            )
        if key in PARAMETERS and PARAMETERS[key].at:
            continue
        ratings[key] = read_rating(key, value, place, f"{name} ({place.file}:{place.line})", generic)
    return ratings, limits


def read_rating(symbol: str, value: Any, place: Place, origin: str = "", generic: bool = False) -> Rating:
    """A rating: a number in SI, ``"25mA"``, or pairs ``["25mA @ 25degC", "0mA @ 100degC"]``."""
    known = RATINGS[symbol]
    if isinstance(value, (int, float)) and not isinstance(value, bool):
        return Rating(symbol, ((math.nan, float(value)),), origin, generic)
    texts = _listed(value)
    if len(texts) == 1 and "@" not in texts[0]:
        return Rating(symbol, ((math.nan, read_number(texts[0], known.unit, place)),), origin, generic)
    at = known.at or "degC"
    pairs = []
    for text in texts:
        quantity, condition = read_at(text, known.unit, at, place)
        if condition is None:
            raise InputError(f"{symbol}: {text!r} lacks its temperature", place=place, mend="write 25mA @ 25degC")
        pairs.append((condition.nominal, quantity.nominal))
    if known.at:
        return Rating(symbol, ((math.nan, pairs[0][1]),), origin, generic)
    return Rating(symbol, tuple(sorted(pairs)), origin, generic)


def inline_rating(symbol: str, text: str, place: Place) -> Rating:
    """A rating written on a device line."""
    return read_rating(symbol, text.split(";") if ";" in text else text, place, f"{place.file}:{place.line}")
