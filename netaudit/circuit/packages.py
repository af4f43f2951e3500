"""Packages of several devices: a part whose row names a block opens into that block, one designator a package."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace

from netaudit.failure import InputError
from netaudit.parts.part import Part
from netaudit.parts.tables import PartTable
from netaudit.place import Place
from netaudit.syntax.export import Instance
from netaudit.syntax.statements import BlockStatement, DeviceStatement, Items, PinItem, Statement, Word


def opened_packages(
    statements: Iterable[Statement], table: PartTable, blocks: Mapping[str, BlockStatement]
) -> tuple[Statement, ...]:
    """The statements, with every device that names a package turned into a placed block."""
    return tuple(_opened(s, table, blocks) if isinstance(s, DeviceStatement) else s for s in statements)


def packages_in(statements: Iterable[Statement], table: PartTable) -> dict[str, tuple[Part, Place]]:
    """The packages that device statements name and where, by designator."""
    found = {}
    for s in statements:
        if isinstance(s, DeviceStatement):
            word = next((k.value for k in s.items.keys if k.key.text == "part"), None)
            part = table.get(word.text) if word is not None else None
            if part is not None and part.block is not None:
                found[s.designator.text] = (part, s.place)
    return found


def _opened(s: DeviceStatement, table: PartTable, blocks: Mapping[str, BlockStatement]) -> DeviceStatement:
    word = next((k.value for k in s.items.keys if k.key.text == "part"), None)
    part = table.get(word.text) if word is not None else None
    if part is None or part.block is None:
        return s
    _known(part, blocks, word or s.designator)
    known = {w.text for w in blocks[part.block].pins}
    pins = tuple(replace(p, pin=replace(p.pin, text=_terminal(part, p.pin.text, known))) for p in s.items.pins)
    keys = tuple(k for k in s.items.keys if k.key.text != "part")
    return replace(s, kind=Word(part.block, s.kind.place), items=Items(s.items.words, keys, pins))


def _terminal(part: Part, pin: str, known: set[str]) -> str:
    """The block's pin of a package pin; a statement may use either."""
    return pin if pin in known else part.pins.get(pin, pin)


def package_statement(instance: Instance, part: Part, blocks: Mapping[str, BlockStatement]) -> DeviceStatement:
    """An export's instance of a package as a placed block; package pins that the export leaves open stay open."""
    here = Word(instance.name, instance.place, True)
    _known(part, blocks, here)
    nets = {part.pins.get(pin, pin): net for pin, net in instance.pins.items()}
    pins = []
    for pin in blocks[part.block or ""].pins:
        net = nets.get(pin.text)
        target = Word("nc", instance.place) if net is None else Word(net, instance.place, True)
        pins.append(PinItem(Word(pin.text, instance.place), target))
    return DeviceStatement(here, Word(part.block or "", instance.place), Items((), (), tuple(pins)), instance.place)


def _known(part: Part, blocks: Mapping[str, BlockStatement], word: Word) -> None:
    if part.block not in blocks:
        raise InputError(
            f"part {part.name} opens into block {part.block}, which is not defined",
            place=word.place,
            mend=f"add: block {part.block} {' '.join(dict.fromkeys(part.pins.values()))} ... end",
        )
