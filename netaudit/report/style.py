"""Plain text for terminals and files: widths, columns, and colour only where a terminal wants it."""

from __future__ import annotations

import os
import re
import shutil
import textwrap
import unicodedata
from collections.abc import Sequence
from dataclasses import dataclass

from netaudit.failure import printable

#: the last column of a table is not cut below this
_LEAST = 16
_COLOUR = re.compile("\x1b\\[[0-9;]*m")
_CODES = {"error": "1;31", "warning": "33", "note": "36"}


@dataclass(frozen=True)
class Style:
    """``colour`` only on a terminal without NO_COLOR (no-color.org); ``width`` in columns."""

    colour: bool = False
    width: int = 100

    @classmethod
    def for_stream(cls, is_terminal: bool) -> Style:
        width = shutil.get_terminal_size((100, 24)).columns if is_terminal else 100
        return cls(is_terminal and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb", max(40, width))

    def _paint(self, text: str, code: str) -> str:
        return f"\x1b[{code}m{text}\x1b[0m" if self.colour else text

    def level(self, level: str) -> str:
        return self._paint(f"{level:<7}", _CODES[level])

    def verdict(self, failed: bool) -> str:
        return self._paint("FAIL", "1;31") if failed else self._paint("PASS", "1;32")

    def faint(self, text: str) -> str:
        return self._paint(text, "2")


def wrapped(text: str, width: int, indent: str) -> list[str]:
    return textwrap.wrap(
        printable(text), width, initial_indent=indent, subsequent_indent=indent, break_long_words=False,
        break_on_hyphens=False,
    ) or [""]  # fmt: skip


def columns_of(text: str) -> int:
    """Terminal columns of a text (East Asian wide characters take two, colour takes none)."""
    return sum(2 if unicodedata.east_asian_width(c) in "WF" else 1 for c in _COLOUR.sub("", text))


def flow(pieces: Sequence[str], width: int) -> list[str]:
    """Pieces on one line as long as they fit, the rest below, indented."""
    lines = [pieces[0]]
    for piece in pieces[1:]:
        if columns_of(lines[-1]) + 2 + columns_of(piece) <= width:
            lines[-1] += f"  {piece}"
        else:
            lines.append(f"  {piece}")
    return lines


def table(rows: Sequence[Sequence[str]], style: Style) -> list[str]:
    """Rows as aligned columns, the first row as heading; the last column is cut where it does not fit.

    In a terminal too narrow for that every row becomes a small paragraph.
    """
    clean = [[printable(c) for c in row] for row in rows]
    widths = [max(columns_of(row[k]) for row in clean) for k in range(len(clean[0]))]
    room = style.width - sum(widths[:-1]) - 2 * (len(widths) - 1)
    if room < min(widths[-1], _LEAST):
        return [line for row in clean[1:] for line in _paragraph(clean[0], row, style)]
    widths[-1] = min(widths[-1], room)
    out = []
    for number, row in enumerate(clean):
        cells = [c + " " * (w - columns_of(c)) for c, w in zip(row, widths, strict=True)]
        last = row[-1] if columns_of(row[-1]) <= widths[-1] else row[-1][: widths[-1] - 1] + "…"
        line = "  ".join([*cells[:-1], last]).rstrip()
        out.append(style.faint(line) if number == 0 else line)
    return out


def _paragraph(heading: Sequence[str], row: Sequence[str], style: Style) -> list[str]:
    """``R1  power`` and below it the other cells with their headings."""
    rest = ", ".join(f"{h} {c}" for h, c in zip(heading[2:], row[2:], strict=True))
    return [*flow(row[:2], style.width), *(wrapped(rest, style.width, "    ") if rest else [])]
