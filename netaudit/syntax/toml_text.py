"""TOML with places: the parsed content, and where each table and key stands in the text.

``tomllib`` says nothing about lines, so the text is walked once more, only when a place is asked for.  The walk leans on
the text being valid TOML 1.0: it looks for headings and keys and skips values, strings of several lines included.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from netaudit.failure import InputError
from netaudit.place import Place

_TOKEN = re.compile(
    r'"""(?:[^\\]|\\.)*?"{3,5}|'
    + r"'''.*?'{3,5}|"
    + r'"(?:[^"\\\n]|\\.)*"|'
    + r"'[^'\n]*'|#[^\n]*|[\[\]{}=\n]|[A-Za-z0-9_-]+",
    re.DOTALL,
)
_WHERE = re.compile(r"\s*\(at (?:line (\d+), column (\d+)|end of document)\)$")

Path = tuple[str, ...]


@dataclass(frozen=True)
class TomlText:
    """A file's text with its parsed content."""

    file: str
    text: str
    data: dict[str, Any]

    @cached_property
    def _spots(self) -> dict[Path, int]:
        """Offset of each heading and key by its path; the first mention counts."""
        spots: dict[Path, int] = {}
        for path, offset in mentions(self.text):
            for size in range(1, len(path) + 1):
                spots.setdefault(path[:size], offset)
        # a heading of its own is a better place for a table than that of its first sub-table
        for path, offset in mentions(self.text):
            if self.text[offset] == "[":
                spots[path] = offset
        return spots

    def place(self, *path: str) -> Place:
        """Where the key or table stands; the nearest thing around it when it has no line of its own."""
        for size in range(len(path), 0, -1):
            offset = self._spots.get(path[:size])
            if offset is not None:
                return self._at(offset)
        return Place(self.file, 1)

    def rows(self, *name: str) -> tuple[dict[str, Place], ...]:
        """For each ``[[name]]`` heading the places of its keys; that of the heading itself under the empty name.
        ``rows("a", "b")`` looks for ``[[a.b]]``."""
        found: list[dict[str, Place]] = []
        size = len(name)
        for path, offset in mentions(self.text):
            if path[:size] != name:
                continue
            if self.text.startswith("[[", offset) and len(path) == size:
                found.append({"": self._at(offset)})
            elif found and len(path) > size:
                found[-1].setdefault(path[size], self._at(offset))
        return tuple(found)

    def _at(self, offset: int) -> Place:
        start = self.text.rfind("\n", 0, offset) + 1
        line = self.text[start:].partition("\n")[0].rstrip("\r")
        return Place(self.file, self.text.count("\n", 0, offset) + 1, offset - start + 1, source=line)


def read_toml(text: str, file: str) -> TomlText:
    """The content of a TOML file.  Raises InputError with line and column for what is not TOML."""
    # tomllib sees CR LF as LF; so must every offset
    text = text.replace("\r\n", "\n")
    try:
        return TomlText(file, text, tomllib.loads(text))
    except tomllib.TOMLDecodeError as error:
        found = _WHERE.search(str(error))
        lines = text.splitlines() or [""]
        line, column = (int(found[1]), int(found[2])) if found and found[1] else (len(lines), len(lines[-1]) + 1)
        place = Place(file, line, column, source=lines[min(line, len(lines)) - 1])
        raise InputError(f"not TOML: {_WHERE.sub('', str(error))}", place=place, mend=_hint(str(error))) from None
    except (RecursionError, ValueError):
        raise InputError("not TOML: nested too deeply or a number too long", place=Place(file, 1)) from None


def _hint(message: str) -> str:
    if "twice" in message or "overwrite" in message:
        return "each part and each key stands once: keep one of them"
    if "Invalid value" in message:
        return 'write values with a unit in quotes: I_F = "25mA"'
    return "check this line: [NAME], then key = value"


def mentions(text: str) -> Iterator[tuple[Path, int]]:
    """(path, offset) of every heading and of every key outside inline tables."""
    heading: Path = ()
    keys: list[str] = []
    start, depth, state = 0, 0, "key"
    for token in _TOKEN.finditer(text):
        word = token[0]
        if word.startswith("#"):
            continue
        if state == "key":
            if word == "[":
                start, state = (token.start(), "heading") if not keys else (start, state)
            elif word == "=":
                yield (*heading, *keys), start
                keys, depth, state = [], 0, "value"
            elif word != "\n":
                start = start if keys else token.start()
                keys.append(_key(word))
        elif word == "\n":
            if depth == 0:
                if state == "heading":
                    heading, keys = tuple(keys), []
                    yield heading, start
                keys, state = [], "key"
        elif state == "heading":
            if word not in "[]":
                keys.append(_key(word))
        elif word in "[{":
            depth += 1
        elif word in "]}":
            depth -= 1
    if state == "heading":
        yield tuple(keys), start


def _key(word: str) -> str:
    """A key as TOML means it: bare, literal, or with escapes."""
    if word[0] == "'" or (word[0] == '"' and "\\" not in word):
        return word[1:-1]
    return next(iter(tomllib.loads(f"{word} = 0"))) if word[0] == '"' else word
