"""EDIF 2 0 0 to an Export: cells looked up, hierarchy flattened to names such as ``A1/R1``."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.edif_cells import Cell, Design, Placed, Reader
from netaudit.syntax.export import Export, Instance
from netaudit.syntax.forms import read_forms

_CYRILLIC = re.compile(rb"[\xc0-\xff]{3}")


def read_edif(data: bytes, file: str) -> Export:
    """The flat netlist of an EDIF file.  Raises InputError with a line for anything that does not hang together."""
    text, encoding = decode(data)
    design = Reader(read_forms(text, file), file).read()
    return Flattener(design, encoding).export()


def decode(data: bytes) -> tuple[str, str]:
    """UTF-8 (with or without byte-order mark); else CP1251 where runs of its letters stand, else Latin-1."""
    try:
        return data.decode("utf-8-sig"), "utf-8"
    except UnicodeDecodeError:
        pass
    if _CYRILLIC.search(data):
        return data.decode("cp1251", errors="replace"), "cp1251"
    return data.decode("latin-1"), "latin-1"


@dataclass
class _Level:
    """A cell being opened: its path (``A1/``), the nets its ports are tied to, and the cells above it."""

    cell: Cell
    path: str
    outer: dict[str, str]
    above: tuple[tuple[str, str], ...]


class Flattener:
    """Opens the hierarchy with a stack of its own, so that depth costs nothing."""

    def __init__(self, design: Design, encoding: str) -> None:
        self.design = design
        self.encoding = encoding
        self.instances: list[Instance] = []
        self.nets: dict[str, None] = {}
        self.remarks: list[str] = list(design.remarks)
        self.names: set[str] = set()
        self.folded: dict[str, str] = {}

    def export(self) -> Export:
        waiting = [_Level(self.design.top, "", {}, (self.design.top.key,))]
        while waiting:
            waiting += reversed(list(self._open(waiting.pop())))
        if self.encoding != "utf-8":
            self.remarks.append(f"the file is not UTF-8: read as {self.encoding}")
        return Export(self.design.file, tuple(self.instances), tuple(self.nets), tuple(self.remarks), self.encoding)

    def _open(self, level: _Level) -> Iterator[_Level]:
        """Adds the parts of one cell; gives the levels of the blocks in it."""
        on_pin = self._wire_up(level)
        for placed in level.cell.placed.values():
            target = self._target(placed, level)
            pins = on_pin.get(placed.name.key, {})
            if target is not None and target.placed:
                if target.key in level.above:
                    raise self._fail(
                        f"cell {target.name} contains itself", placed.line, "break the cycle in the export"
                    )
                inner = f"{level.path}{self._name(placed)}/"
                yield _Level(target, inner, pins, (*level.above, target.key))
            else:
                self.instances.append(self._instance(placed, target, pins, level))

    def _wire_up(self, level: _Level) -> dict[str, dict[str, str]]:
        """Nets of the cell to flat names; gives {instance key: {port key: net}}."""
        on_pin: dict[str, dict[str, str]] = {}
        for wire in level.cell.wires:
            outer = next((level.outer[j.port] for j in wire.joined if not j.instance and j.port in level.outer), None)
            net = outer if outer is not None else self._net(level.path + wire.name.original, wire.line)
            for joined in wire.joined:
                if not joined.instance:
                    self._own_port(level, joined.port, joined.line)
                    continue
                placed = level.cell.placed.get(joined.instance)
                if placed is None:
                    raise self._fail(f"net {wire.name.original}: there is no instance {joined.instance}", joined.line)
                pins = on_pin.setdefault(joined.instance, {})
                key = self._port(placed, joined.port, level, joined.line)
                if pins.setdefault(key, net) != net:
                    raise self._fail(
                        f"pin {joined.port} of {placed.name.original} is joined to net {pins[key]} and to net {net}",
                        joined.line,
                        "a pin can be on one net only",
                    )
        return on_pin

    def _own_port(self, level: _Level, port: str, line: int) -> None:
        if level.cell.ports and port not in level.cell.ports:
            raise self._fail(f"cell {level.cell.name} has no port {port}", line)

    def _port(self, placed: Placed, port: str, level: _Level, line: int) -> str:
        target = self._target(placed, level)
        if target is not None and target.ports and port not in target.ports:
            raise self._fail(f"{placed.name.original}: its cell {target.name} has no port {port}", line)
        return port

    def _net(self, name: str, line: int) -> str:
        """A net of that name; a second net of the same name stays apart under a name of its own."""
        unique, count = name, 1
        while unique in self.nets:
            count += 1
            unique = f"{name}~{count}"
        if unique != name:
            self.remarks.append(f"line {line}: a second net called {name}: kept apart as {unique}")
        twin = self.folded.setdefault(unique.casefold(), unique)
        if twin != unique:
            self.remarks.append(f"line {line}: nets {twin} and {unique} differ only in letter case: kept apart")
        self.nets[unique] = None
        return unique

    def _target(self, placed: Placed, level: _Level) -> Cell | None:
        cell = self.design.cells.get(placed.cell)
        if cell is None and placed.cell[1]:
            raise self._fail(
                f"instance {placed.name.original} is of cell {placed.cell[1]} in library {placed.cell[0]}, "
                "which is not there",
                placed.line,
            )
        return cell

    def _name(self, placed: Placed) -> str:
        return placed.designator or placed.name.original

    def _instance(self, placed: Placed, target: Cell | None, on_pin: dict[str, str], level: _Level) -> Instance:
        pins: dict[str, str] = {}
        ports: dict[str, str] = {}
        for key, net in on_pin.items():
            port = target.ports.get(key) if target is not None else None
            original = port.name.original if port is not None else key
            number = placed.pins.get(key) or (port.designator if port is not None else "") or original
            pins[number] = net
            ports[number] = original
        properties = list(placed.properties)
        stated = {p.name.casefold() for p in properties if p.text.strip()}
        if target is not None:
            properties += [p for p in target.properties if p.name.casefold() not in stated]
        self._contradictions(placed)
        name = self._flat_name(level.path + self._name(placed), placed.line)
        cell = target.name if target is not None else placed.cell[1]
        return Instance(
            name, self._name(placed), cell, tuple(properties), pins, Place(self.design.file, placed.line), ports
        )

    def _flat_name(self, name: str, line: int) -> str:
        """Several units of one package share a designator: each gets its place in ``instances`` all the same."""
        if name in self.names:
            self.remarks.append(f"line {line}: {name} is drawn in several units")
        self.names.add(name)
        return name

    def _contradictions(self, placed: Placed) -> None:
        seen: dict[str, str] = {}
        for p in placed.properties:
            if p.text.strip() and seen.setdefault(p.name.casefold(), p.text) != p.text:
                self.remarks.append(
                    f"line {placed.line}: {placed.name.original} states {p.name} twice: "
                    f"{seen[p.name.casefold()]!r} is used, not {p.text!r}"
                )

    def _fail(self, what: str, line: int, mend: str = "") -> InputError:
        return InputError(what, place=Place(self.design.file, line), mend=mend)
