"""One logical line to a statement, through the lark grammar."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.text import shown
from netaudit.syntax import words
from netaudit.syntax.lines import LogicalLine
from netaudit.syntax.mistakes import STATEMENTS, explain, refuse_lookalikes, unknown_statement
from netaudit.syntax.shape import Token, shapes
from netaudit.syntax.statements import (
    AmbientStatement,
    CoveredStatement,
    DeviceStatement,
    Draw,
    ExpectStatement,
    GroundStatement,
    KeyItem,
    OmitStatement,
    PartsStatement,
    PlaceStatement,
    SameHeatStatement,
    SetStatement,
    Statement,
    TitleStatement,
    Word,
)
from netaudit.syntax.words import RESERVED as RESERVED

Tokens = tuple[Token, ...]
#: what begins a comment elsewhere
_COMMENTS = ("//", "--")


@dataclass(frozen=True)
class Mark:
    """A line that opens, closes or steers: mode, block, end, include, only."""

    word: str
    name: Word
    place: Place
    pins: tuple[Word, ...] = ()
    defaults: tuple[KeyItem, ...] = ()


class Parser:
    """Parses the lines of one file."""

    def __init__(self) -> None:
        self._shapes = shapes()

    def parse(self, line: LogicalLine, *, first: bool) -> Statement | Mark:
        """The statement of a line; ``first`` demands ``netlist 1``."""
        if not line.text.isascii():
            refuse_lookalikes(line)
        try:
            shaped = self._shapes.read(line.text)
        except self._shapes.refusal as error:
            raise explain(line, error, first) from None
        if first != (shaped.rule == "netlist"):
            raise _order(line, first)
        return _MAKERS[shaped.rule](line, shaped.tokens)


def _order(line: LogicalLine, first: bool) -> InputError:
    start = len(line.text) - len(line.text.lstrip())
    if first:
        return InputError(
            "the first statement is not netlist 1", place=line.place(start), mend="begin the file with: netlist 1"
        )
    return InputError("a second netlist statement", place=line.place(start), mend="remove it")


def _whole(line: LogicalLine) -> Place:
    start = len(line.text) - len(line.text.lstrip())
    return line.place(start, len(line.text.rstrip()))


def _make_netlist(line: LogicalLine, c: Tokens) -> Mark:
    if c[0].text != "1":
        raise InputError(
            f"netlist version {shown(c[0].text)} is not known",
            place=words.of(line, c[0]).place,
            mend="this release reads: netlist 1",
        )
    return Mark("netlist", words.of(line, c[0]), _whole(line))


def _make_title(line: LogicalLine, c: Tokens) -> Statement:
    return TitleStatement(words.of(line, c[0]), _whole(line))


def _make_parts(line: LogicalLine, c: Tokens) -> Statement:
    word = words.of(line, c[0])
    if not word.quoted and word.text != "common":
        raise InputError(
            f"parts {shown(word.text)}",
            place=word.place,
            mend=f'a file stands in quotes: parts "{word.text[:60]}", or: parts common',
        )
    return PartsStatement(word, "", _whole(line))


def _make_ground(line: LogicalLine, c: Tokens) -> Statement:
    return GroundStatement(words.name(line, c[0], "net"), _whole(line))


def _make_ambient(line: LogicalLine, c: Tokens) -> Statement:
    found = tuple(words.of(line, t) for t in c)
    if len(found) == 2 and (".." not in found[1].text or ".." in found[0].text):
        raise InputError(
            f"{shown(found[1].text)} is not the range of an ambient temperature",
            place=found[1].place,
            mend=STATEMENTS["ambient"],
        )
    return AmbientStatement(found, _whole(line))


def _make_omit(line: LogicalLine, c: Tokens) -> Statement:
    return OmitStatement(tuple(words.name(line, t, "designator") for t in c), _whole(line))


def _make_place(line: LogicalLine, c: Tokens) -> Statement:
    return PlaceStatement(tuple(words.name(line, t, "designator") for t in c), _whole(line))


def _make_change(line: LogicalLine, c: Tokens) -> Statement:
    items = words.items(line, c[1:])
    if items.pins:
        pin = items.pins[0].pin
        raise InputError(
            "set changes values and states, not pins", place=pin.place, mend="use two devices and omit one"
        )
    if not items.words and not items.keys:
        raise InputError("set without a change", place=_whole(line), mend="say what changes: set R1 1k")
    return SetStatement(words.name(line, c[0], "designator"), items, _whole(line))


def _make_only(line: LogicalLine, c: Tokens) -> Mark:
    word = words.of(line, c[0])
    if word.text != "modes":
        raise InputError(f"only {shown(word.text)}", place=word.place, mend="did you mean: only modes")
    return Mark("only", word, _whole(line))


def _make_mode(line: LogicalLine, c: Tokens) -> Mark:
    return Mark("mode", words.of(line, c[0]), _whole(line))


def _make_end(line: LogicalLine, c: Tokens) -> Mark:
    place = _whole(line)
    return Mark("end", Word("end", place), place)


def _make_include(line: LogicalLine, c: Tokens) -> Mark:
    return Mark("include", words.of(line, c[0]), _whole(line))


def _make_block(line: LogicalLine, c: Tokens) -> Mark:
    pins = tuple(words.name(line, t, "pin") for t in c[1:] if t.type != "KEY")
    keys = tuple(words.key(line, t) for t in c[1:] if t.type == "KEY")
    words.once(pins, "pin")
    words.once((k.key for k in keys), "key")
    return Mark("block", words.name(line, c[0], "block"), _whole(line), pins, keys)


def _make_expect(line: LogicalLine, c: Tokens) -> Statement:
    tokens = c[1:]
    mode = None
    if len(tokens) >= 3 and tokens[-1].type == "STRING" and tokens[-2].text == "mode":
        mode = words.of(line, tokens[-1])
        tokens = tokens[:-2]
    elif len(tokens) >= 4 and tokens[-2].text == "mode" and ".." in tokens[-3].text:
        name = words.of(line, tokens[-1])
        raise InputError(
            f"the mode {shown(name.text)} stands without quotes",
            place=name.place,
            mend=f'write mode "{name.text[:60]}"',
        )
    if len(tokens) < 2:
        raise InputError(
            "an expectation needs a target and a range", place=_whole(line), mend="write: expect voltage NET 4.5V..5.5V"
        )
    span = words.of(line, tokens[-1])
    targets, pin = [], None
    for token in tokens[:-1]:
        if token.type == "PIN":
            device, pin = words.pair(line, token)
            targets.append(words.checked(device, "designator"))
        else:
            targets.append(words.name(line, token, "net or designator"))
    quantity = words.of(line, c[0])
    most = 2 if quantity.text == "voltage" else 1
    if len(targets) > most:
        raise InputError(
            f"{len(targets)} targets of one {shown(quantity.text)}", place=targets[-1].place, mend=f"at most {most}"
        )
    return ExpectStatement(quantity, tuple(targets), pin, span, mode, _whole(line))


def _make_same_heat(line: LogicalLine, c: Tokens) -> Statement:
    key = words.key(line, c[-1])
    if key.key.text != "R_th":
        raise InputError(
            f"same-heat takes R_th, not {shown(key.key.text)}", place=key.key.place, mend="write R_th=20K/W"
        )
    return SameHeatStatement(tuple(words.name(line, t, "designator") for t in c[:-1]), key.value, _whole(line))


def _make_covered(line: LogicalLine, c: Tokens) -> Statement:
    what = words.of(line, c[2])
    draws = []
    for token in c[3:]:
        source, sink, value = words.pair(line, token)
        draws.append(Draw(words.checked(source, "pin"), words.checked(sink, "pin"), value))
    if what.text == "draws" and not draws:
        raise InputError("draws without a current", place=what.place, mend="write: draws VCC:GND=80mA")
    if what.text not in ("draws", "no-current") or (what.text == "no-current" and draws):
        raise InputError(f"covered … {shown(what.text)}", place=what.place, mend="no-current, or: draws VCC:GND=80mA")
    return CoveredStatement(words.name(line, c[0], "designator"), words.of(line, c[1]), tuple(draws), _whole(line))


def _make_device(line: LogicalLine, c: Tokens) -> Statement:
    designator = words.name(line, c[0], "designator", reserved=True)
    items = words.items(line, c[2:])
    if not items.pins and not designator.quoted:
        if designator.text in _COMMENTS:
            raise InputError(f"{designator.text} begins no comment", place=_whole(line), mend="a comment begins with #")
        meant = unknown_statement(designator.text)
        if meant is not None:
            raise InputError(
                f"{shown(designator.text)} is not a statement", place=designator.place, mend=f"did you mean {meant}?"
            )
    return DeviceStatement(designator, words.of(line, c[1]), items, _whole(line))


_MAKERS: dict[str, Callable[[LogicalLine, Tokens], Statement | Mark]] = {
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
