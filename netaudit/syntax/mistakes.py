"""Known mistakes by name: what a line that does not parse was probably meant to say."""

from __future__ import annotations

import re
from typing import Any

from netaudit.failure import InputError
from netaudit.syntax.lines import LogicalLine

#: (pattern, what is wrong, what would mend it); the place is the pattern's first group
_KNOWN: tuple[tuple[re.Pattern[str], str, str], ...] = (
    (
        re.compile(r'^[^"]*(?:"(?:\\["\\]|[^"\\])*"[^"]*)*(")[^"]*$'),
        "a quote that is never closed",
        'add the closing "',
    ),
    (re.compile(r'"(?:[^"\\]|\\["\\])*(\\)[^"\\]'), "an unknown escape", 'only \\" and \\\\ are escapes'),
    (re.compile(r"\S(\s+[:=]|[:=]\s+|[:=]$)"), "a blank beside : or =", "write PIN:NET and key=value without blanks"),
    (
        re.compile(r"(,\s|\s,|,$)"),
        "a comma between items",
        "items are parted by blanks, a comma joins value and tolerance",
    ),
    (re.compile(r"\S+=\S*?(:)\S*"), "a : in the value of a key", "put the value in double quotes"),
    (re.compile(r"\S+:\S*?(:)\S*"), "a second : in PIN:NET", "a net name with a colon needs double quotes"),
    (re.compile(r"\S+=\S*(=)\S*"), "a second = in key=value", "put the value in double quotes"),
)


_TYPOGRAPHIC = re.compile(r'"(?:\\["\\]|[^"\\])*"|([\u201c\u201d\u201e\u2018\u2019])')


def refuse_quotes(line: LogicalLine) -> None:
    """Typographic quotes outside straight ones: a word processor was here."""
    for match in _TYPOGRAPHIC.finditer(line.text):
        if match[1]:
            place = line.place(match.start(1), match.end(1))
            raise InputError("a typographic quote", place=place, mend='use the straight "')


def explain(line: LogicalLine, error: Any, first: bool) -> InputError:
    """The error for a line that the grammar refuses."""
    text = line.text
    for pattern, what, mend in _KNOWN:
        match = pattern.search(text)
        if match is not None:
            return InputError(what, place=line.place(match.start(1), match.end(1)), mend=mend)
    start = getattr(error, "pos_in_stream", None)
    token = getattr(error, "token", None)
    if token is not None and getattr(token, "start_pos", None) is not None:
        start = token.start_pos
    words = text.split()
    if first and words and words[0] != "netlist":
        begin = len(text) - len(text.lstrip())
        return InputError(
            "this does not begin with netlist 1", place=line.place(begin), mend="begin it with: netlist 1"
        )
    at_end = start is None or start >= len(text.rstrip()) or (token is not None and token.type == "$END")
    if at_end:
        return InputError(
            f"the statement {words[0][:40]!r} ends too early",
            place=line.place(len(text.rstrip()) - 1, len(text.rstrip())),
            mend=_SHAPES.get(words[0], "a device is written: DESIGNATOR KIND value PIN:NET ..."),
        )
    start = start or 0
    found = re.match(r"\S+", text[start:])
    word = found.group() if found else text[start : start + 1]
    return InputError(
        f"{word[:60]!r} does not fit here",
        place=line.place(start, start + len(word)),
        mend=_SHAPES.get(words[0], "a device is written: DESIGNATOR KIND value PIN:NET ..."),
    )


_SHAPES = {
    "netlist": "write: netlist 1",
    "title": 'write: title "..."',
    "parts": 'write: parts "file.toml"',
    "include": 'write: include "file"',
    "ground": "write: ground NET",
    "ambient": "write: ambient 25degC 0degC..50degC",
    "omit": "write: omit DESIGNATOR ...",
    "place": "write: place DESIGNATOR ...",
    "set": "write: set DESIGNATOR value",
    "only": "write: only modes",
    "mode": 'write: mode "name"',
    "end": "end stands alone",
    "block": "write: block NAME PIN ... key=default",
    "expect": 'write: expect voltage NET 4.5V..5.5V mode "name"',
    "same-heat": "write: same-heat DESIGNATOR DESIGNATOR R_th=20K/W",
    "covered": 'write: covered DESIGNATOR "why" no-current',
}
