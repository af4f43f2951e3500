"""Tokens to words with places: names, ``key=value``, ``PIN:NET``, and what may be said twice."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from sys import intern

from netaudit.failure import InputError
from netaudit.quantities.text import shown
from netaudit.quantities.units import FORMS, PREFIXES
from netaudit.syntax.lines import LogicalLine
from netaudit.syntax.mistakes import STATEMENTS
from netaudit.syntax.shape import Token
from netaudit.syntax.statements import Items, KeyItem, PinItem, Word

#: the words that begin a statement; as a designator they need quotes
RESERVED = frozenset(STATEMENTS)
_NAME = re.compile(r"(?:[A-Za-z0-9_+\-/~]|\.(?!\.))+")
_SPLIT = re.compile(r'("(?:\\["\\]|[^"\\])*"|[^":=]+)([:=]|$)')
#: what is left alone when a blank stands inside a value
_STRAY = frozenset(PREFIXES).union(["R"], *FORMS.values())
_JOINERS = frozenset(["..", "±", "+-", "@", "%"])
_ESCAPE = re.compile(r'\\(["\\])')


def word(line: LogicalLine, text: str, start: int) -> Word:
    """The word that stands at a position of the line, its quotes taken off."""
    place = line.place(start, start + len(text))
    if text[:1] == '"':
        inner = text[1:-1]
        return Word(intern(_ESCAPE.sub(r"\1", inner) if "\\" in inner else inner), place, True)
    # names, kinds and values come back again and again: one string for each
    return Word(intern(text), place)


def of(line: LogicalLine, token: Token) -> Word:
    """The word of a whole token."""
    return word(line, token.text, token.start)


def name(line: LogicalLine, token: Token, what: str, reserved: bool = False) -> Word:
    """The word of a token that names something."""
    return checked(of(line, token), what, reserved)


def checked(found: Word, what: str, reserved: bool = False) -> Word:
    """The word itself when it may stand as a name: InputError for one that needs quotes or is empty."""
    text = found.text
    if found.quoted:
        if not text.strip():
            raise InputError(f"an empty {what}", place=found.place, mend="give it a name")
        return found
    if _NAME.fullmatch(text) is None:
        if reserved and text.startswith((";", "*", "/*", "%")):
            raise InputError(f"{shown(text)} begins no statement", place=found.place, mend="a comment begins with #")
        raise InputError(
            f"{shown(text)} needs quotes as a {what}", place=found.place, mend=f'write "{text[:60]}" in double quotes'
        )
    if reserved and text in RESERVED:
        raise InputError(
            f"{text} is a statement's word", place=found.place, mend=f'as a {what} it needs quotes: "{text}"'
        )
    return found


def pair(line: LogicalLine, token: Token) -> list[Word]:
    """The parts of ``PIN:NET``, ``key=value`` or ``PIN:PIN=value``."""
    parts, position, text = [], 0, token.text
    while position < len(text):
        match = _SPLIT.match(text, position)
        if match is None:
            # the value of a key may hold anything: the rest is one word
            parts.append(word(line, text[position:], token.start + position))
            break
        parts.append(word(line, match[1], token.start + position))
        position = match.end()
    return parts


def key(line: LogicalLine, token: Token) -> KeyItem:
    """``key=value``."""
    left, _, right = token.text.partition("=")
    item = KeyItem(word(line, left, token.start), word(line, right, token.start + len(left) + 1))
    if right[-1] == ",":
        raise InputError(
            f"a blank beside the comma of {shown(token.text)}",
            place=item.value.place,
            mend="write key=value,tolerance without blanks",
        )
    return item


def pin(line: LogicalLine, token: Token) -> PinItem:
    """``PIN:NET``."""
    if '"' in token.text:
        left, right = pair(line, token)
    else:
        first, _, second = token.text.partition(":")
        left, right = word(line, first, token.start), word(line, second, token.start + len(first) + 1)
    return PinItem(checked(left, "pin"), checked(right, "net"))


def items(line: LogicalLine, tokens: Sequence[Token]) -> Items:
    """What follows a kind, sorted by sort of item; keys and pins each at most once."""
    words, keys, pins = [], [], []
    for token in tokens:
        if token.type == "PIN":
            pins.append(pin(line, token))
        elif token.type == "KEY":
            keys.append(key(line, token))
        else:
            words.append(of(line, token))
            _whole_value(words)
    if len(keys) > 1:
        once((k.key for k in keys), "key")
    if len(pins) > 1:
        once((p.pin for p in pins), "pin")
    return Items(tuple(words), tuple(keys), tuple(pins))


def _whole_value(words: Sequence[Word]) -> None:
    """InputError when the last bare item is a piece of a value that has a blank inside."""
    last = words[-1]
    text = last.text
    before = words[-2].text if len(words) > 1 else ""
    if text in _JOINERS or (text in _STRAY and before[-1:].isalnum() and before[0] in "0123456789+-±"):
        raise InputError(
            f"{shown(text)} stands alone: a blank inside a value",
            place=last.place,
            mend="write it without blanks, as in " + (f"{text}25mV" if text in ("±", "+-") else before[:40] + text),
        )
    if text[-1] == ",":
        raise InputError(
            f"a blank beside the comma of {shown(text)}", place=last.place, mend="write value,tolerance without blanks"
        )


def once(words: Iterable[Word], what: str) -> None:
    """InputError for a word that stands twice."""
    seen: set[str] = set()
    for found in words:
        if found.text in seen:
            raise InputError(f"{what} {shown(found.text)} stands twice", place=found.place, mend="keep one of them")
        seen.add(found.text)
