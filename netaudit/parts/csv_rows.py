"""CSV part tables (RFC 4180): a heading, then a row a part; comma, semicolon or tab, a byte-order mark allowed.

Every row is split into cells when the file is read; what the cells say is looked at when a board uses the part.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Callable, Iterable, Iterator, Mapping
from typing import Any

from netaudit.failure import InputError
from netaudit.parts.row import GROUPS, Row, known_key, meant
from netaudit.place import Place

_FLAGS: Mapping[str, bool] = {"yes": True, "true": True, "1": True, "no": False, "false": False, "0": False}


class CsvRows:
    """The rows of one file: where each begins and ends in the text, by part name."""

    def __init__(self, text: str, file: str) -> None:
        # some spreadsheets end lines with a lone CR
        self.text = text.replace("\r\n", "\n").replace("\r", "\n") if "\r" in text else text
        self.file = file
        first = self.text.lstrip("\n").partition("\n")[0]
        self.separator = max(",;\t", key=first.count)
        self.heading: list[str] = []
        self._spans: dict[str, tuple[int, int, int]] = {}
        self._read()

    @property
    def names(self) -> Iterable[str]:
        return self._spans

    def place(self, name: str) -> Place:
        line, start, end = self._spans[name]
        return Place(self.file, line, source=self.text[start:end].partition("\n")[0])

    def row(self, name: str) -> Row:
        line, start, end = self._spans[name]
        raw = self.text[start:end]
        (cells,) = csv.reader(io.StringIO(raw, newline=""), delimiter=self.separator, strict=True)
        values: dict[str, Any] = {}
        locate = self._locator(raw, line)
        for column, cell in zip(self.heading, cells, strict=False):
            text = cell.strip()
            if text and column != "name":
                _store(values, column, _flag(text, name, locate(column)) if column == "generic" else text)
        return Row(name, values, locate)

    def _read(self) -> None:
        for cells, line, start, end in self._records():
            place = Place(self.file, line, source=self.text[start:end].partition("\n")[0])
            if not self.heading:
                self.heading = _heading(cells, place)
                at = self.heading.index("name")
                continue
            if len(cells) > len(self.heading) and any(c.strip() for c in cells[len(self.heading) :]):
                raise InputError(
                    f"{len(cells)} cells in a table of {len(self.heading)} columns",
                    place=place,
                    mend="put a cell that holds the separator in quotes",
                )
            name = cells[at].strip() if at < len(cells) else ""
            if not name:
                raise InputError("a row without a part name", place=place, mend="fill the column name")
            if name in self._spans:
                before = self._spans[name][0]
                raise InputError(f"part {name} stands twice (line {before} too)", place=place, mend="keep one row")
            self._spans[name] = (line, start, end)
        if not self.heading:
            raise InputError(
                "the part table is empty", place=Place(self.file, 1), mend="the first row names the columns"
            )

    def _records(self) -> Iterator[tuple[list[str], int, int, int]]:
        """(cells, line, start, end) of every row that holds anything."""
        offset = 0

        def lines() -> Iterator[str]:
            nonlocal offset
            for text in io.StringIO(self.text, newline=""):
                offset += len(text)
                yield text

        reader = csv.reader(lines(), delimiter=self.separator, strict=True)
        line, start = 1, 0
        try:
            for cells in reader:
                if any(c.strip() for c in cells):
                    yield cells, line, start, offset
                line, start = reader.line_num + 1, offset
        except csv.Error as error:
            raise InputError(
                f"not CSV: {error}",
                place=Place(self.file, line),
                mend='a cell with quotes stands in quotes, each doubled: "a ""b"""',
            ) from None

    def _locator(self, raw: str, line: int) -> Callable[..., Place]:
        def locate(*path: str) -> Place:
            column = next((c for c in (".".join(path), *path) if c in self.heading), None)
            if column is None and path[:1] == ("ratings",):
                column = next((c for c in path[1:] if c in self.heading), None)
            offset = _cell_start(raw, self.heading.index(column), self.separator) if column is not None else 0
            start = raw.rfind("\n", 0, offset) + 1
            source = raw[start:].partition("\n")[0]
            return Place(self.file, line + raw.count("\n", 0, offset), offset - start + 1, source=source)

        return locate


def _cell_start(raw: str, number: int, separator: str) -> int:
    """Offset of a row's cell, past blanks and its opening quote."""
    quoted = False
    for offset, char in enumerate(raw):
        if number == 0:
            blanks = len(raw[offset:]) - len(raw[offset:].lstrip(' "'))
            return offset + blanks
        if char == '"':
            quoted = not quoted
        elif char == separator and not quoted:
            number -= 1
    return 0


def _heading(cells: list[str], place: Place) -> list[str]:
    heading = [c.strip() for c in cells]
    while heading and not heading[-1]:
        heading.pop()
    if "name" not in heading:
        near = next((h for h in heading if h.casefold() == "name"), "")
        mend = f"write {near} in small letters" if near else "the first row names the columns, one of them name"
        raise InputError("the table has no column name", place=place, mend=mend)
    seen: set[str] = set()
    for column in heading:
        group = column.partition(".")[0]
        if column in seen:
            raise InputError(f"column {column or 'without a name'} stands twice", place=place, mend="keep one of them")
        seen.add(column)
        if not column:
            raise InputError("a column without a name", place=place, mend="name it, or remove it")
        if "." in column and group not in GROUPS:
            raise InputError(f"unknown column {column}", place=place, mend="pins., spread. and ratings. can stand so")
        if "." not in column and (not known_key(column) or column in GROUPS):
            mend = f"a column {column}.NAME for each" if column in GROUPS else meant(column)
            raise InputError(f"unknown column {column}", place=place, mend=mend)
    return heading


def _store(values: dict[str, Any], column: str, text: str | bool) -> None:
    """``pins.1`` into the table ``pins``; ``ratings.pins.IO3`` one deeper (a pin's name may hold points)."""
    group, dot, key = column.partition(".")
    if not dot:
        values[column] = text
        return
    table: dict[str, Any] = values.setdefault(group, {})
    if group == "ratings" and key.startswith("pins."):
        table, key = table.setdefault("pins", {}), key.removeprefix("pins.")
    table[key] = text


def _flag(text: str, name: str, place: Place) -> bool:
    if text.casefold() not in _FLAGS:
        raise InputError(f"part {name}: generic is yes or no, not {text!r}", place=place, mend="write yes or no")
    return _FLAGS[text.casefold()]
