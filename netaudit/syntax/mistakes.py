"""Known mistakes by name: what a line that does not parse was probably meant to say.

Every search here is linear in the line, whatever stands in it: a wrong line must not cost more than a right one.
"""

from __future__ import annotations

import re
import unicodedata
from typing import Any

from netaudit.failure import InputError
from netaudit.quantities.text import shown
from netaudit.syntax.lines import LogicalLine
from netaudit.syntax.suggest import closest

_STRING = re.compile(r'"(?:\\["\\]|[^"\\])*"')
_TYPOGRAPHIC = "\u201c\u201d\u201e\u201f\u2018\u2019\u00ab\u00bb"

#: (pattern on the line with its strings masked, what is wrong, what would mend it); the place is the first group
_ANYWHERE: tuple[tuple[re.Pattern[str], str, str], ...] = (
    (
        re.compile(r"[^ \t]([ \t]+[:=]|[:=][ \t]+|[:=]$)"),
        "a blank beside : or =",
        "write PIN:NET and key=value without blanks",
    ),
    (
        re.compile(r"(,[ \t]|[ \t],|,$)"),
        "a comma between items",
        "items are parted by blanks, a comma joins value and tolerance",
    ),
)
#: the same on the one word at which the grammar stopped
_IN_WORD: tuple[tuple[re.Pattern[str], str, str], ...] = (
    (
        re.compile(r"[^:=]+[:=][^:=]*([,;])[^:=,;]+[:=]"),
        "a comma or semicolon between items",
        "items are parted by blanks",
    ),
    (re.compile(r"()[:=]"), "nothing stands before : or =", "write PIN:NET and key=value without blanks"),
    (
        re.compile(r"[^:=]+:[^:=]+(=)[^:=]+$"),
        "a current between pins outside covered",
        'write: covered DESIGNATOR "why" draws PIN:PIN=80mA',
    ),
    (re.compile(r"[^:=]+=[^:=]*(:)"), "a : in the value of a key", "put the value in double quotes"),
    (re.compile(r"[^:=]+:[^:=]*(:)"), "a second : in PIN:NET", "a net name with a colon needs double quotes"),
    (re.compile(r"[^:=]+=[^:=]*(=)"), "a second = in key=value", "put the value in double quotes"),
    (re.compile(r"(?![A-Za-z_][\w.]*=)[^:=]+(=)"), "a = where a pin stands", "a pin is joined to its net by a colon"),
    (re.compile(r'[^"]*"[^"]*"([^:="])'), "text close to a closing quote", "put a blank behind the quote"),
    (re.compile(r'[^"]*[^:="](")'), "a quote inside a word", "the quotes go round the whole name"),
)
_LONGEST_WORD = 400

_DEVICE = "a device is written: DESIGNATOR KIND value PIN:NET ..."
#: each statement's word and how it is written
STATEMENTS = {
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
    "covered": 'write: covered DESIGNATOR "why" no-current, or: ... draws PIN:PIN=80mA',
}


def refuse_lookalikes(line: LogicalLine) -> None:
    """Characters outside strings that look like blanks or quotes, or like nothing: a word processor was here."""
    for column, c in enumerate(_masked(line.text)):
        if c.isascii():
            continue
        place = line.place(column, column + 1)
        if c in _TYPOGRAPHIC:
            raise InputError("a typographic quote", place=place, mend='use the straight "')
        if unicodedata.category(c) in ("Zs", "Cf"):
            named = f"U+{ord(c):04X}, {unicodedata.name(c, 'without a name').lower()}"
            raise InputError(
                f"an invisible character ({named})", place=place, mend="write an ordinary blank, or nothing"
            )


def explain(line: LogicalLine, error: Any, first: bool) -> InputError:
    """The error for a line that the grammar refuses (``error`` is lark's UnexpectedInput)."""
    open_or_escape = _bad_string(line)
    if open_or_escape is not None:
        return open_or_escape
    text = line.text
    word = text.split(None, 1)[0]
    if first and word != "netlist":
        begin = len(text) - len(text.lstrip())
        return InputError(
            "this does not begin with netlist 1", place=line.place(begin), mend="begin it with: netlist 1"
        )
    bare = _masked(text)
    for pattern, what, mend in _ANYWHERE:
        match = pattern.search(bare)
        if match is not None:
            return InputError(what, place=line.place(match.start(1), match.end(1)), mend=mend)
    start = _stopped(error)
    if start is None or start >= len(text.rstrip()):
        end = len(text.rstrip())
        return InputError(
            f"the statement {shown(word)} ends too early", place=line.place(end - 1, end), mend=_shape(word, bare)
        )
    return _at(line, bare, start, word)


def _at(line: LogicalLine, bare: str, start: int, statement: str) -> InputError:
    """The error at the word where the grammar stopped."""
    begin = max(bare.rfind(" ", 0, start), bare.rfind("\t", 0, start)) + 1
    found = re.compile(r"[^ \t]+").match(bare, begin)
    end = found.end() if found else start + 1
    if end - begin <= _LONGEST_WORD:
        for pattern, what, mend in _IN_WORD:
            # strings are masked with their quotes kept, so that a colon in a string does not count
            match = pattern.match(bare, begin, end)
            if match is not None:
                return InputError(what, place=line.place(match.start(1), max(match.end(1), begin + 1)), mend=mend)
    if bare[begin] == '"' and statement not in STATEMENTS and unknown_statement(statement) is None:
        return InputError(
            f"{shown(line.text[begin:end])} stands in quotes",
            place=line.place(begin, end),
            mend="only names are quoted (designators, pins, nets); kinds, values and states are not",
        )
    return InputError(
        f"{shown(line.text[begin:end])} does not fit here", place=line.place(begin, end), mend=_shape(statement, bare)
    )


def _stopped(error: Any) -> int | None:
    """Where lark stopped; None at the end of the line."""
    token = getattr(error, "token", None)
    if token is None:
        position = getattr(error, "pos_in_stream", None)
        return None if position is None else int(position)
    return None if token.type == "$END" or token.start_pos is None else int(token.start_pos)


def _masked(text: str) -> str:
    """The text with the inside of every string replaced, its quotes and its length kept."""
    if '"' not in text:
        return text
    return _STRING.sub(lambda m: '"' + "x" * (len(m[0]) - 2) + '"', text)


def _bad_string(line: LogicalLine) -> InputError | None:
    """A quote that is never closed, or an unknown escape in a string."""
    opened = -1
    escape = False
    for k, c in enumerate(line.text):
        if escape:
            escape = False
            if c not in '"\\':
                return InputError(
                    "an unknown escape", place=line.place(k - 1, k + 1), mend='only \\" and \\\\ are escapes'
                )
        elif c == '"':
            opened = k if opened < 0 else -1
        elif c == "\\" and opened >= 0:
            escape = True
    if opened < 0:
        return None
    return InputError("a quote that is never closed", place=line.place(opened, opened + 1), mend='add the closing "')


def unknown_statement(word: str) -> str | None:
    """The statement that a word at the start of a line was probably meant to be."""
    if word in STATEMENTS or not word.replace("-", "").isalpha() or len(word) < 3:
        return None
    return closest(word, STATEMENTS)


def _shape(word: str, bare: str) -> str:
    """How the statement is written."""
    shape = STATEMENTS.get(word)
    if shape is None:
        meant = unknown_statement(word)
        return f"did you mean the statement {meant}? {STATEMENTS[meant]}" if meant else _DEVICE
    if word not in ("expect", "covered") and re.search(r"[^ \t]:[^ \t]", bare):
        return f'{shape}; a designator called {word} needs quotes: "{word}"'
    return shape
