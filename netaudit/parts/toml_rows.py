"""TOML part tables: a table a part.

A file of plain rows (simple texts, numbers, lists and inline tables) is checked by one regular expression as it is read,
and a row is parsed when a board uses the part: a library of a hundred thousand rows costs what the board needs of it.
Any other file is parsed whole.  Keys that stand twice in one row are found when that row is used.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterable
from typing import Any

from netaudit.failure import InputError
from netaudit.parts.row import Row
from netaudit.place import Place
from netaudit.syntax.toml_text import mentions, read_toml

# no control characters, no escapes; possessive, so that a text that does not fit is left at once
_TEXT = r"""(?:"[^"\\\x00-\x08\x0a-\x1f\x7f]*+"(?!")|'[^'\x00-\x08\x0a-\x1f\x7f]*+'(?!'))"""
_KEY = rf"(?:[A-Za-z0-9_-]++|{_TEXT})"
_KEYS = rf"{_KEY}(?:[ \t]*+\.[ \t]*+{_KEY})*+"
_COMMENT = r"(?:\#[^\x00-\x08\x0a-\x1f\x7f]*+)?+"
_END = rf"[ \t]*+{_COMMENT}(?:\n|\Z)"
_SCALAR = rf"(?:{_TEXT}|true|false|[+-]?(?:0|[1-9][0-9]*+)(?:\.[0-9]++)?+(?:[eE][+-]?[0-9]++)?+)"
_GAP = r"(?:[ \t\n]|\#[^\x00-\x08\x0a-\x1f\x7f]*+\n)*+"
_LIST = rf"\[{_GAP}(?:{_SCALAR}{_GAP},{_GAP})*+(?:{_SCALAR}{_GAP})?+\]"
_PAIR = rf"[ \t]*+{_KEYS}[ \t]*+=[ \t]*+{_SCALAR}[ \t]*+"
_INLINE = rf"\{{(?:{_PAIR}(?:,{_PAIR})*+|[ \t]*+)\}}"
_LINE = rf"(?:[ \t]*+{_KEYS}[ \t]*+=[ \t]*+(?:{_SCALAR}|{_LIST}|{_INLINE}){_END}|[ \t]*+{_COMMENT}\n)"
_TABLE = re.compile(
    rf"[ \t]*+\[[ \t]*+(?P<name>{_KEY})(?P<rest>(?:[ \t]*+\.[ \t]*+{_KEY})*+)[ \t]*+\]{_END}{_LINE}*+"
    r"(?:[ \t]++\Z)?+"
)
_LEAD = re.compile(rf"(?:[ \t]*+{_COMMENT}\n)*+")
Spans = tuple[tuple[int, int], ...]


class TomlRows:
    """The rows of one file, by part name: where each part's tables stand in the text."""

    def __init__(self, text: str, file: str) -> None:
        # tomllib sees CR LF as LF; so must every offset
        self.text = text.replace("\r\n", "\n") if "\r" in text else text
        self.file = file
        self._data: dict[str, Any] | None = None
        spans = _spans(self.text)
        if spans is None:
            self._data = read_toml(self.text, file).data
            spans = dict.fromkeys(self._data, ((0, len(self.text)),))
        self._spans = spans
        for name, row in (self._data or {}).items():
            if not isinstance(row, dict):
                what = (
                    f"part {name} stands in double brackets"
                    if isinstance(row, list)
                    else f"{name} stands outside any part"
                )
                raise InputError(what, place=self._locate(name), mend="begin a part with [NAME]")

    @property
    def names(self) -> Iterable[str]:
        return self._spans

    def place(self, name: str) -> Place:
        return self._locate(name)

    def row(self, name: str) -> Row:
        return Row(name, self._values(name), lambda *path: self._locate(name, *path))

    def _values(self, name: str) -> dict[str, Any]:
        data = self._data
        if data is None:
            try:
                data = tomllib.loads("".join(self.text[a:b] for a, b in self._spans[name]))
            except (tomllib.TOMLDecodeError, ValueError, RecursionError):
                # the whole text has the same mistake, at its own line
                data = read_toml(self.text, self.file).data
        found: dict[str, Any] = data[name]
        return found

    def _locate(self, *path: str) -> Place:
        """Where a key or table stands; the nearest thing around it when it has no place of its own."""
        best, found = (0, False), self._spans[path[0]][0][0]
        for start, end in self._spans[path[0]]:
            part = self.text[start:end]
            for mentioned, offset in mentions(part):
                size = next((k for k, (a, b) in enumerate(zip(mentioned, path, strict=False)) if a != b), None)
                size = min(len(mentioned), len(path)) if size is None else size
                # a heading of its own is a better place for a table than that of its first sub-table
                score = (size, mentioned == path[:size])
                if score > best:
                    best, found = score, start + offset
        if best[0] < len(path) and best[1]:
            found = self._inside(found, path[best[0]])
        line_start = self.text.rfind("\n", 0, found) + 1
        source = self.text[line_start : line_start + 500].partition("\n")[0]
        line = self.text.count("\n", 0, found) + 1
        return Place(self.file, line, found - line_start + 1, source=source)

    def _inside(self, offset: int, key: str) -> int:
        """The place of a key of an inline table that begins behind ``offset``; that of the table without it."""
        line = self.text[offset:].partition("\n")[0] if len(self.text) < 100_000 else self.text[offset : offset + 4000]
        match = re.search(rf"""[{{,]\s*(?P<key>(["']?){re.escape(key)}\2)\s*=""", line.partition("\n")[0])
        return offset + match.start("key") if match else offset


def _spans(text: str) -> dict[str, Spans] | None:
    """Where each part's tables stand; None for a text that is more than plain, or not TOML."""
    lead = _LEAD.match(text)
    end = lead.end() if lead else 0
    spans: dict[str, Spans] = {}
    before = ""
    while end < len(text):
        match = _TABLE.match(text, end)
        if match is None:
            return None
        name = match["name"]
        if name[0] in "\"'":
            name = name[1:-1]
        known = spans.get(name)
        if known is None:
            spans[name] = ((end, match.end()),)
        elif not match["rest"]:
            # the part may stand twice
            return None
        elif name == before:
            spans[name] = (*known[:-1], (known[-1][0], match.end()))
        else:
            spans[name] = (*known, (end, match.end()))
        before, end = name, match.end()
    return spans
