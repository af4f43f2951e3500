"""Connection tables and lists of parts as capture tools write them (RFC 4180 CSV and its common cousins)."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.decode import decode
from netaudit.syntax.export import Export, Instance, Property
from netaudit.syntax.export_settings import DEFAULTS, ExportSettings, folded

_BOUNDS = re.compile(r"^(?P<letters>[^\d\s]+)(?P<first>\d+)\s*(?:-|\.\.|–)\s*(?P=letters)?(?P<last>\d+)$")
_LARGEST_GROUP = 10_000
#: rows among which the headings are looked for
_TITLES = 30


@dataclass(frozen=True)
class Headings:
    """Where the known columns stand, and the names of the rest."""

    columns: dict[str, int]
    others: tuple[tuple[int, str], ...]


@dataclass
class _Row:
    cells: list[str]
    line: int


@dataclass
class _Part:
    place: Place
    pins: dict[str, str] = field(default_factory=dict)
    ports: dict[str, str] = field(default_factory=dict)
    properties: list[Property] = field(default_factory=list)


def read_table(data: bytes, file: str, settings: ExportSettings = DEFAULTS) -> Export:
    """A connection table (columns designator, pin, net) or a list of parts (designator and anything else).

    Raises InputError with a line for missing columns, empty cells where something must stand, a pin on two nets.
    """
    text, encoding = decode(data, settings.encoding)
    rows = list(_rows(text, file))
    if not rows:
        raise InputError("the table is empty", place=Place(file, 1), mend="its first row names the columns")
    start, headings = _heading_row(rows, file, settings)
    connections = {"pin", "net"} <= set(headings.columns)
    if not connections and {"pin", "net"} & set(headings.columns):
        lacking = "net" if "pin" in headings.columns else "pin"
        raise InputError(
            f"a connection table needs the columns designator, pin and net: there is no {lacking}",
            place=Place(file, rows[start].line),
            mend=f"name a column {lacking}",
        )
    parts: dict[str, _Part] = {}
    nets: dict[str, None] = {}
    for row in rows[start + 1 :]:
        (_connection if connections else _listed)(row, headings, parts, nets, file)
    instances = tuple(
        Instance(name, name, "", tuple(p.properties), p.pins, p.place, p.ports) for name, p in parts.items()
    )
    remarks = (
        ()
        if encoding == "utf-8"
        else (f"the file is not UTF-8: read as {encoding} (encoding in [export] names another)",)
    )
    return Export(file, instances, tuple(nets), remarks, encoding)


def _rows(text: str, file: str) -> Iterator[_Row]:
    """Rows that hold anything, with the line each begins on; quoted fields may hold line breaks."""
    if "\0" in text:
        raise InputError("this is not a text file", place=Place(file, 1), mend="export the table as CSV")
    csv.field_size_limit(1_000_000)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=_separator(text), strict=True)
    line = 1
    try:
        for cells in reader:
            if any(c.strip() for c in cells):
                yield _Row(cells, line)
            line = reader.line_num + 1
    except csv.Error as error:
        raise InputError(
            f"the table cannot be read: {error}", place=Place(file, line), mend="check the quotes"
        ) from None


def _separator(text: str) -> str:
    """Comma, semicolon, tab or bar: the one that splits one of the first rows most."""
    lines = re.sub(r'"[^"]*"', "", text[:20_000].lstrip("\r\n ")).split("\n")[:_TITLES]
    return max(",;\t|", key=lambda separator: max(line.count(separator) for line in lines))


def _heading_row(rows: Sequence[_Row], file: str, settings: ExportSettings) -> tuple[int, Headings]:
    """The row that names the columns: the first with designators, after titles that some tools write."""
    for number, row in enumerate(rows[:_TITLES]):
        headings = _headings(row, settings)
        if "designator" in headings.columns and len([c for c in row.cells if c.strip()]) > 1:
            return number, headings
    raise InputError(
        "no column with the designators: " + ", ".join(c.strip() for c in rows[0].cells)[:200],
        place=Place(file, rows[0].line),
        mend="name it designator",
    )


def _headings(row: _Row, settings: ExportSettings) -> Headings:
    found: dict[str, int] = {}
    headings = [folded(c) for c in row.cells]
    for name in ("designator", "pin", "net", "port"):
        for word in map(folded, settings.columns[name]):
            if word in headings and headings.index(word) not in found.values():
                found[name] = headings.index(word)
                break
    others = tuple((k, c.strip()) for k, c in enumerate(row.cells) if k not in found.values() and c.strip())
    return Headings(found, others)


def _cell(row: _Row, number: int) -> str:
    return row.cells[number].strip() if number < len(row.cells) else ""


def _connection(row: _Row, headings: Headings, parts: dict[str, _Part], nets: dict[str, None], file: str) -> None:
    place = Place(file, row.line)
    designator, pin, net = (_cell(row, headings.columns[c]) for c in ("designator", "pin", "net"))
    for what, text in (("designator", designator), ("pin", pin)):
        if not text:
            raise InputError(f"a row without a {what}", place=place, mend=f"fill in the {what} or remove the row")
    part = parts.setdefault(designator, _Part(place))
    _add_properties(part, row, headings)
    if not net:
        # an unconnected pin is listed without a net by many tools
        return
    nets.setdefault(net)
    port = _cell(row, headings.columns["port"]) if "port" in headings.columns else ""
    if port:
        part.ports.setdefault(pin, port)
    if part.pins.setdefault(pin, net) != net:
        raise InputError(
            f"pin {pin} of {designator} is on net {part.pins[pin]} and on net {net}",
            place=place,
            mend="a pin can be on one net only",
        )


def _listed(row: _Row, headings: Headings, parts: dict[str, _Part], nets: dict[str, None], file: str) -> None:
    place = Place(file, row.line)
    names = designators(_cell(row, headings.columns["designator"]), place)
    for name in names:
        if name in parts:
            raise InputError(
                f"{name} is listed twice (first in line {parts[name].place.line})", place=place, mend="keep one row"
            )
        parts[name] = _Part(place)
        _add_properties(parts[name], row, headings)


def _add_properties(part: _Part, row: _Row, headings: Headings) -> None:
    known = {p.name for p in part.properties}
    for number, name in headings.others:
        text = _cell(row, number)
        if text and name not in known:
            part.properties.append(Property(name, text))


def designators(text: str, place: Place) -> list[str]:
    """``R1, R3-R5`` to R1, R3, R4, R5; separators are commas, semicolons and blanks."""
    out: list[str] = []
    joined = re.sub(r"\s*(-|–|\.\.)\s*(?=\S)", r"\1", text)
    for item in re.split(r"[,;\s]+", joined):
        if not item:
            continue
        match = _BOUNDS.match(item)
        if match is None:
            out.append(item)
            continue
        first, last = int(match["first"]), int(match["last"])
        if not first <= last <= first + _LARGEST_GROUP:
            raise InputError(f"the group {item} does not rise from {first} to {last}", place=place)
        out += [f"{match['letters']}{k}" for k in range(first, last + 1)]
    return out


def merged(exports: Sequence[Export]) -> Export:
    """Several tables of one board as one: pins from the connection tables, properties from wherever they are given."""
    order: dict[str, Instance] = {}
    nets: dict[str, None] = {}
    remarks: list[str] = []
    for export in exports:
        nets.update(dict.fromkeys(export.nets))
        remarks += export.remarks
        for instance in export.instances:
            known = order.get(instance.name)
            order[instance.name] = instance if known is None else _joined(known, instance)
    return Export(exports[0].file, tuple(order.values()), tuple(nets), tuple(remarks), exports[0].encoding)


def _joined(a: Instance, b: Instance) -> Instance:
    pins = dict(a.pins)
    for pin, net in b.pins.items():
        if pins.setdefault(pin, net) != net:
            raise InputError(
                f"pin {pin} of {b.name} is on net {pins[pin]} in {a.place.file} and on net {net} here", place=b.place
            )
    stated = {p.name.casefold() for p in a.properties}
    properties = (*a.properties, *(p for p in b.properties if p.name.casefold() not in stated))
    return Instance(a.name, a.designator, a.cell or b.cell, properties, pins, a.place, {**a.ports, **b.ports})
