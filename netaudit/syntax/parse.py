"""One logical line to a statement, through the lark grammar."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass
from functools import cache, lru_cache
from typing import Any

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.grammar import grammar_text
from netaudit.syntax.lines import LogicalLine
from netaudit.syntax.mistakes import explain, refuse_quotes
from netaudit.syntax.statements import (
    AmbientStatement,
    CoveredStatement,
    DeviceStatement,
    Draw,
    ExpectStatement,
    GroundStatement,
    Items,
    KeyItem,
    OmitStatement,
    PartsStatement,
    PinItem,
    PlaceStatement,
    SameHeatStatement,
    SetStatement,
    Statement,
    TitleStatement,
    Word,
)

_NAME = re.compile(r"^[A-Za-z0-9_+\-./~]+$")
_SPLIT = re.compile(r'("(?:\\["\\]|[^"\\])*"|[^":=]+)([:=]|$)')
RESERVED = frozenset(
    [
        "netlist",
        "title",
        "parts",
        "include",
        "ground",
        "ambient",
        "omit",
        "place",
        "set",
        "only",
        "mode",
        "end",
        "block",
        "expect",
        "same-heat",
        "covered",
    ]
)


@dataclass(frozen=True)
class Mark:
    """A line that opens, closes or steers: mode, block, end, include, only."""

    word: str
    name: Word
    place: Place
    pins: tuple[Word, ...] = ()
    defaults: tuple[KeyItem, ...] = ()


@cache
def _lark() -> Any:
    from lark import Lark

    return Lark(grammar_text("netlist.lark"), parser="lalr", lexer="contextual", propagate_positions=False)


@lru_cache(maxsize=1024)
def _tree(text: str) -> Any:
    """The tree of a line; tokens count from the line's start, so that equal lines share one."""
    return _lark().parse(text).children[0]


class Parser:
    """Parses the lines of one file."""

    def parse(self, line: LogicalLine, *, first: bool) -> Statement | Mark:
        """The statement of a line; ``first`` demands ``netlist 1``."""
        from lark.exceptions import UnexpectedInput

        if not line.text.isascii():
            refuse_quotes(line)
        try:
            tree = _tree(line.text)
        except UnexpectedInput as error:
            raise explain(line, error, first) from None
        make: Callable[[LogicalLine, list[Any]], Statement | Mark] = _MAKERS[tree.data]
        if first != (tree.data == "netlist"):
            raise _order(line, first)
        return make(line, tree.children)


def _order(line: LogicalLine, first: bool) -> InputError:
    start = len(line.text) - len(line.text.lstrip())
    if first:
        return InputError(
            "the first statement is not netlist 1", place=line.place(start), mend="begin the file with: netlist 1"
        )
    return InputError("a second netlist statement", place=line.place(start), mend="remove it")


def _word(line: LogicalLine, token: Any) -> Word:
    return _text(line, str(token), token.start_pos)


def _text(line: LogicalLine, text: str, start: int) -> Word:
    place = line.place(start, start + len(text))
    if text.startswith('"'):
        return Word(re.sub(r'\\(["\\])', r"\1", text[1:-1]), place, True)
    return Word(text, place)


def _name(line: LogicalLine, token: Any, what: str, reserved: bool = False) -> Word:
    return _checked(_word(line, token), what, reserved)


def _checked(word: Word, what: str, reserved: bool = False) -> Word:
    if word.quoted:
        if not word.text.strip():
            raise InputError(f"an empty {what}", place=word.place, mend="give it a name")
        return word
    if not _NAME.match(word.text) or ".." in word.text:
        raise InputError(
            f"{word.text!r} needs quotes as a {what}", place=word.place, mend=f'write "{word.text}" in double quotes'
        )
    if reserved and word.text in RESERVED:
        raise InputError(
            f"{word.text} is a statement's word", place=word.place, mend=f'as a {what} it needs quotes: "{word.text}"'
        )
    return word


def _whole(line: LogicalLine) -> Place:
    start = len(line.text) - len(line.text.lstrip())
    return line.place(start, len(line.text.rstrip()))


def _pair(line: LogicalLine, token: Any) -> list[Word]:
    """The parts of PIN:NET, key=value or PIN:PIN=value."""
    out, position = [], 0
    text = str(token)
    while position < len(text):
        match = _SPLIT.match(text, position)
        if match is None:
            # the value of a key may hold anything: the rest is one word
            out.append(_text(line, text[position:], token.start_pos + position))
            break
        out.append(_text(line, match[1], token.start_pos + position))
        position = match.end()
    return out


def _key(line: LogicalLine, token: Any) -> KeyItem:
    name, value = str(token).split("=", 1)
    start = token.start_pos
    return KeyItem(_text(line, name, start), _text(line, value, start + len(name) + 1))


def _pin(line: LogicalLine, token: Any) -> PinItem:
    pin, net = _pair(line, token)
    return PinItem(_checked(pin, "pin"), _checked(net, "net"))


def _items(line: LogicalLine, tokens: list[Any]) -> Items:
    words, keys, pins = [], [], []
    for item in tokens:
        token = item.children[0]
        if token.type == "PIN":
            pins.append(_pin(line, token))
        elif token.type == "KEY":
            keys.append(_key(line, token))
        else:
            words.append(_word(line, token))
    _once([k.key for k in keys], "key")
    _once([p.pin for p in pins], "pin")
    return Items(tuple(words), tuple(keys), tuple(pins))


def _once(words: list[Word], what: str) -> None:
    seen: set[str] = set()
    for word in words:
        if word.text in seen:
            raise InputError(f"{what} {word.text} stands twice", place=word.place, mend="keep one of them")
        seen.add(word.text)


def _make_netlist(line: LogicalLine, c: list[Any]) -> Mark:
    if str(c[0]) != "1":
        raise InputError(
            f"netlist version {c[0]} is not known", place=_word(line, c[0]).place, mend="this release reads: netlist 1"
        )
    return Mark("netlist", _word(line, c[0]), _whole(line))


def _make_title(line: LogicalLine, c: list[Any]) -> Statement:
    return TitleStatement(_word(line, c[0]), _whole(line))


def _make_parts(line: LogicalLine, c: list[Any]) -> Statement:
    word = _word(line, c[0])
    if not word.quoted and word.text != "common":
        raise InputError(
            f"parts {word.text}",
            place=word.place,
            mend=f'a file stands in quotes: parts "{word.text}", or: parts common',
        )
    return PartsStatement(word, "", _whole(line))


def _make_ground(line: LogicalLine, c: list[Any]) -> Statement:
    return GroundStatement(_name(line, c[0], "net"), _whole(line))


def _make_ambient(line: LogicalLine, c: list[Any]) -> Statement:
    return AmbientStatement(tuple(_word(line, t) for t in c if t is not None), _whole(line))


def _make_omit(line: LogicalLine, c: list[Any]) -> Statement:
    return OmitStatement(tuple(_name(line, t, "designator") for t in c), _whole(line))


def _make_place(line: LogicalLine, c: list[Any]) -> Statement:
    return PlaceStatement(tuple(_name(line, t, "designator") for t in c), _whole(line))


def _make_change(line: LogicalLine, c: list[Any]) -> Statement:
    items = _items(line, c[1:])
    if items.pins:
        pin = items.pins[0].pin
        raise InputError(
            "set changes values and states, not pins", place=pin.place, mend="use two devices and omit one"
        )
    if not items.words and not items.keys:
        raise InputError("set without a change", place=_whole(line), mend="say what changes: set R1 1k")
    return SetStatement(_name(line, c[0], "designator"), items, _whole(line))


def _make_only(line: LogicalLine, c: list[Any]) -> Mark:
    word = _word(line, c[0])
    if word.text != "modes":
        raise InputError(f"only {word.text}", place=word.place, mend="did you mean: only modes")
    return Mark("only", word, _whole(line))


def _make_mode(line: LogicalLine, c: list[Any]) -> Mark:
    return Mark("mode", _word(line, c[0]), _whole(line))


def _make_end(line: LogicalLine, c: list[Any]) -> Mark:
    place = _whole(line)
    return Mark("end", Word("end", place), place)


def _make_include(line: LogicalLine, c: list[Any]) -> Mark:
    return Mark("include", _word(line, c[0]), _whole(line))


def _make_block(line: LogicalLine, c: list[Any]) -> Mark:
    pins = tuple(_name(line, t, "pin") for t in c[1:] if t.type != "KEY")
    keys = tuple(_key(line, t) for t in c[1:] if t.type == "KEY")
    _once(list(pins), "pin")
    _once([k.key for k in keys], "key")
    return Mark("block", _name(line, c[0], "block"), _whole(line), pins, keys)


def _make_expect(line: LogicalLine, c: list[Any]) -> Statement:
    tokens = [t.children[0] for t in c[1:]]
    mode = None
    if len(tokens) >= 3 and tokens[-1].type == "STRING" and str(tokens[-2]) == "mode":
        mode = _word(line, tokens[-1])
        tokens = tokens[:-2]
    if len(tokens) < 2:
        raise InputError(
            "an expectation needs a target and a range", place=_whole(line), mend="write: expect voltage NET 4.5V..5.5V"
        )
    span = _word(line, tokens[-1])
    targets, pin = [], None
    for token in tokens[:-1]:
        if token.type == "PIN":
            device, pin = _pair(line, token)
            targets.append(_checked(device, "designator"))
        else:
            targets.append(_name(line, token, "net or designator"))
    quantity = _word(line, c[0])
    most = 2 if quantity.text == "voltage" else 1
    if len(targets) > most:
        raise InputError(
            f"{len(targets)} targets of one {quantity.text}", place=targets[-1].place, mend=f"at most {most}"
        )
    return ExpectStatement(quantity, tuple(targets), pin, span, mode, _whole(line))


def _make_same_heat(line: LogicalLine, c: list[Any]) -> Statement:
    key = _key(line, c[-1])
    if key.key.text != "R_th":
        raise InputError(f"same-heat takes R_th, not {key.key.text}", place=key.key.place, mend="write R_th=20K/W")
    return SameHeatStatement(tuple(_name(line, t, "designator") for t in c[:-1]), key.value, _whole(line))


def _make_covered(line: LogicalLine, c: list[Any]) -> Statement:
    what = _word(line, c[2])
    draws = []
    for token in c[3:]:
        source, sink, value = _pair(line, token)
        draws.append(Draw(_checked(source, "pin"), _checked(sink, "pin"), value))
    if what.text == "draws" and not draws:
        raise InputError("draws without a current", place=what.place, mend="write: draws VCC:GND=80mA")
    if what.text not in ("draws", "no-current") or (what.text == "no-current" and draws):
        raise InputError(f"covered … {what.text}", place=what.place, mend="no-current, or: draws VCC:GND=80mA")
    return CoveredStatement(_name(line, c[0], "designator"), _word(line, c[1]), tuple(draws), _whole(line))


def _make_device(line: LogicalLine, c: list[Any]) -> Statement:
    designator = _name(line, c[0], "designator", reserved=True)
    return DeviceStatement(designator, _word(line, c[1]), _items(line, c[2:]), _whole(line))


_MAKERS: dict[str, Callable[[LogicalLine, list[Any]], Statement | Mark]] = {
    "netlist": _make_netlist,
    "title": _make_title,
    "parts": _make_parts,
    "include": _make_include,
    "ground": _make_ground,
    "ambient": _make_ambient,
    "omit": _make_omit,
    "place": _make_place,
    "change": _make_change,
    "only": _make_only,
    "mode": _make_mode,
    "end": _make_end,
    "block": _make_block,
    "expect": _make_expect,
    "same_heat": _make_same_heat,
    "covered": _make_covered,
    "device": _make_device,
}
