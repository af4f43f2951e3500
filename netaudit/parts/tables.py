"""Part tables: TOML (a table a part) and CSV (a row a part); a row is understood when a board asks for its part."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path

from netaudit.failure import InputError
from netaudit.parts.csv_rows import CsvRows
from netaudit.parts.make import make_part
from netaudit.parts.part import Part
from netaudit.parts.row import Rows
from netaudit.parts.toml_rows import TomlRows
from netaudit.place import Place

#: a replaced part is named one by one up to this many
_NAMED = 20


@dataclass(frozen=True)
class PartTable:
    """The file of each part by the part's name; ``overridden`` names parts that a later table replaced, with both places."""

    rows: Mapping[str, Rows] = field(default_factory=dict)
    files: Mapping[str, str] = field(default_factory=dict)
    overridden: tuple[str, ...] = ()
    _made: dict[str, Part] = field(default_factory=dict, compare=False, repr=False)

    def get(self, name: str) -> Part | None:
        """The part, its model worked out (once); None when no row has that name.  Raises InputError for a row that
        cannot be."""
        if name not in self._made and name in self.rows:
            self._made[name] = make_part(self.rows[name].row(name))
        return self._made.get(name)

    def merge(self, later: PartTable) -> PartTable:
        """Both tables; rows of the later one win."""
        twice = [name for name in later.rows if name in self.rows]
        said = [_replaced(name, self.rows[name], later.rows[name]) for name in twice[:_NAMED]]
        if len(twice) > _NAMED:
            said.append(f"{len(twice) - _NAMED} more parts are replaced by rows of later tables")
        return PartTable(
            {**self.rows, **later.rows}, {**self.files, **later.files}, (*self.overridden, *later.overridden, *said)
        )


def _replaced(name: str, before: Rows, after: Rows) -> str:
    return f"part {name} of {before.place(name).file} is replaced by the row in {after.place(name).file}"


def read_table(path: str, named: str | None = None, place: Place | None = None) -> PartTable:
    """A table from a file; ``place`` is the statement that asked for it."""
    shown = named or path
    try:
        data = Path(path).read_bytes()
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "that is no file name"
        raise InputError(
            f"the part table {shown} cannot be read: {reason}", place=place, mend="check the name"
        ) from None
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data[: error.start].count(b"\n") + 1
        column = error.start - data.rfind(b"\n", 0, error.start)
        raise InputError(
            "the part table is not UTF-8", place=Place(shown, line, column), mend="save it as UTF-8"
        ) from None
    rows: Rows = CsvRows(text, shown) if shown.lower().endswith(".csv") else TomlRows(text, shown)
    return PartTable(dict.fromkeys(rows.names, rows), {path: hashlib.sha256(data).hexdigest()})


@cache
def common_table() -> PartTable:
    """The generic classes that ship with netaudit (``parts common``)."""
    text = Path(__file__).with_name("common.toml").read_text(encoding="utf-8")
    rows = TomlRows(text, "parts common")
    return PartTable(dict.fromkeys(rows.names, rows))
