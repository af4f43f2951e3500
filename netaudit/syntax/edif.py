"""EDIF 2 0 0 to an Export: cells looked up, hierarchy flattened to names such as ``A1/R1``."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.collector import collector_paused
from netaudit.syntax.decode import decode
from netaudit.syntax.edif_cells import Cell, CellKey, Design, Joined, Placed, Reader, Wire, find_cell, of_library
from netaudit.syntax.edif_names import bus_names
from netaudit.syntax.export import Export, Instance
from netaudit.syntax.export_settings import DEFAULTS, ExportSettings, folded
from netaudit.syntax.forms import read_forms

#: parts and blocks that a flattened design may have
_MOST = 1_000_000


def read_edif(data: bytes, file: str, settings: ExportSettings = DEFAULTS) -> Export:
    """The flat netlist of an EDIF file.  Raises InputError with a line for anything that does not hang together."""
    text, encoding = decode(data, settings.encoding)
    with collector_paused():
        design = Reader(read_forms(text, file), file, settings).read()
        return Flattener(design, encoding, settings).export()


@dataclass
class _Level:
    """A cell being opened: its path (``A1/``), the nets its ports are tied to, the cells above it, and the nets of its
    pages by name with the page each was first drawn on."""

    cell: Cell
    path: str
    ports: dict[str, str]
    above: tuple[CellKey, ...]
    drawn: dict[str, tuple[str, int]] = field(default_factory=dict)


class Flattener:
    """Opens the hierarchy with a stack of its own, so that depth costs nothing."""

    def __init__(self, design: Design, encoding: str, settings: ExportSettings) -> None:
        self.design = design
        self.encoding = encoding
        self.settings = settings
        self.instances: list[Instance] = []
        self.nets: dict[str, None] = {}
        self.remarks: list[str] = list(design.remarks)
        self.clashes: list[tuple[str, str, int]] = []
        self.folded: dict[str, str] = {}
        self.tied: dict[str, str] = {}
        self.globals: dict[str, str] = {}
        self.targets: dict[CellKey, Cell | None] = {}

    def export(self) -> Export:
        self._bounded()
        waiting = [_Level(self.design.top, "", {}, (self.design.top.key,))]
        while waiting:
            waiting += reversed(list(self._open(waiting.pop())))
        if self.encoding != "utf-8":
            self.remarks.append(f"the file is not UTF-8: read as {self.encoding} (encoding in [export] names another)")
        nets, instances = tuple(self.nets), tuple(self.instances)
        if self.tied:
            nets = tuple(n for n in nets if n not in self.tied)
            instances = tuple(replace(i, pins={p: self._net_of(n) for p, n in i.pins.items()}) for i in instances)
        return Export(self.design.file, instances, nets, tuple(self.remarks), self.encoding, tuple(self.clashes))

    def _open(self, level: _Level) -> Iterator[_Level]:
        """Adds the parts of one cell; gives the levels of the blocks in it."""
        on_pin = self._wire_up(level)
        for key, placed in level.cell.placed.items():
            target = self._target(placed)
            pins = on_pin.get(key, {})
            if target is not None and target.placed:
                if target.key in level.above:
                    raise self._fail(
                        f"cell {target.name} contains itself", placed.line, "break the cycle in the export"
                    )
                inner = f"{level.path}{self._name(placed)}/"
                yield _Level(target, inner, dict(pins), (*level.above, target.key))
            else:
                self.instances.append(self._instance(placed, target, pins, level))

    def _bounded(self) -> None:
        """Counts what the flattened design would hold, cell by cell, before anything is opened."""
        sizes: dict[CellKey, int] = {}
        waiting = [self.design.top]
        begun: set[CellKey] = set()
        while waiting:
            cell = waiting[-1]
            inner = [t for p in cell.placed.values() if (t := self._target(p)) is not None and t.placed]
            fresh = [t for t in inner if t.key not in sizes and t.key not in begun] if cell.key not in begun else []
            begun.add(cell.key)
            if fresh:
                waiting += fresh
                continue
            waiting.pop()
            # a cell inside itself counts nothing here: opening it says so
            sizes[cell.key] = len(cell.placed) + sum(sizes.get(t.key, 0) for t in inner)
            if sizes[cell.key] > _MOST:
                raise self._fail(
                    f"cell {cell.name} with its blocks has more than {_MOST} parts",
                    cell.line,
                    "is a block placed too often?",
                )

    def _wire_up(self, level: _Level) -> dict[str, dict[str, str]]:
        """Nets of the cell to flat names; gives {instance key: {port key: net}}."""
        on_pin: dict[str, dict[str, str]] = {}
        for wire in level.cell.wires:
            for name, joined in self._single(wire, level.cell):
                net = self._flat(name, joined, wire, level)
                for j in joined:
                    if j.instance:
                        self._join(j, net, name, on_pin.setdefault(j.instance, {}), level.cell)
        return on_pin

    def _single(self, wire: Wire, cell: Cell) -> Iterator[tuple[str, list[Joined]]]:
        """A net, or the nets of a bus with the members of the array ports that it joins."""
        arrays = [self._array(j, cell) for j in wire.joined]
        widths = {len(a) for a in arrays if a}
        if not wire.name.sizes and not widths:
            yield wire.name.original, wire.joined
            return
        size = 1
        for n in wire.name.sizes:
            size *= n
        size = size if wire.name.sizes else max(widths)
        for j, array in zip(wire.joined, arrays, strict=True):
            if len(array) != size:
                raise self._fail(
                    f"net {wire.name.original}: {size} wires, but {j.port} has {len(array) or 1}",
                    j.line,
                    "join its members one by one",
                )
        for k, name in enumerate(bus_names(wire.name.original, size)):
            yield name, [Joined(a[k], j.instance, j.line) for j, a in zip(wire.joined, arrays, strict=True)]

    def _array(self, joined: Joined, cell: Cell) -> list[str]:
        """The member keys of an array port that is joined as a whole; empty for a single pin."""
        if joined.instance is None:
            return []
        if not joined.instance:
            return cell.arrays.get(joined.port, [])
        placed = cell.placed.get(joined.instance)
        target = self._target(placed) if placed is not None else None
        return target.arrays.get(joined.port, []) if target is not None and target.arrays else []

    def _flat(self, name: str, joined: list[Joined], wire: Wire, level: _Level) -> str:
        """The net's flat name: that of the net outside where a port of the cell is on it, else one of its own."""
        fixed: list[str] = []
        open_ports: list[tuple[dict[str, str], str]] = []
        for j in joined:
            if j.instance:
                continue
            known, key = (self.globals, j.port) if j.instance is None else (level.ports, self._own_port(level, j))
            if key in known:
                fixed.append(known[key])
            else:
                open_ports.append((known, key))
        other = level.drawn.get(name)
        if other is not None and other[1] != wire.page:
            # a net that goes on on another page is drawn there under the same name
            fixed.append(other[0])
        net = fixed[0] if fixed else self._net(level.path + name, wire.line)
        for another in fixed[1:]:
            self._tie(net, another, wire.line)
        for known, key in open_ports:
            known[key] = net
        if wire.page:
            level.drawn.setdefault(name, (net, wire.page))
        return net

    def _join(self, j: Joined, net: str, name: str, pins: dict[str, str], cell: Cell) -> None:
        placed = cell.placed.get(j.instance or "")
        if placed is None:
            raise self._fail(f"net {name}: there is no instance {j.instance}", j.line, "export the schematic again")
        target = self._target(placed)
        if target is not None and target.ports and j.port not in target.ports:
            raise self._fail(f"{placed.name.original}: its cell {target.name} has no port {j.port}", j.line)
        known = pins.setdefault(j.port, net)
        if known != net and self._net_of(known) != self._net_of(net):
            raise self._fail(
                f"pin {j.port} of {placed.name.original} is joined to net {known} and to net {net}",
                j.line,
                "a pin can be on one net only",
            )

    def _own_port(self, level: _Level, j: Joined) -> str:
        cell = level.cell
        if cell.ports and j.port not in cell.ports and j.port not in cell.off_page:
            raise self._fail(f"cell {cell.name} has no port {j.port}", j.line)
        return j.port

    def _tie(self, a: str, b: str, line: int) -> None:
        """Two nets that turn out to be one; the first name stays."""
        a, b = self._net_of(a), self._net_of(b)
        if a != b:
            self.tied[b] = a
            self.remarks.append(f"line {line}: nets {a} and {b} are joined: called {a}")

    def _net_of(self, net: str) -> str:
        while net in self.tied:
            net = self.tied[net]
        return net

    def _net(self, name: str, line: int) -> str:
        """A net of that name; a second net of the same name stays apart under a name of its own."""
        unique, count = name, 1
        while unique in self.nets:
            count += 1
            unique = f"{name}~{count}"
        if unique != name:
            self.clashes.append((name, unique, line))
        twin = self.folded.setdefault(unique.casefold(), unique)
        if twin != unique:
            self.clashes.append((twin, unique, line))
        self.nets[unique] = None
        return unique

    def _target(self, placed: Placed) -> Cell | None:
        key = placed.cell
        if key not in self.targets:
            cell = find_cell(self.design.cells, key)
            if cell is None and key[1]:
                raise self._fail(
                    f"instance {placed.name.original} is of cell {key[1]}{of_library(key)}, which is not there",
                    placed.line,
                    "export the schematic with its libraries",
                )
            self.targets[key] = cell
        return self.targets[key]

    def _name(self, placed: Placed) -> str:
        """The designator, else a property that the settings call one, else the instance's own name."""
        found = placed.designator
        if not found:
            names = self.settings.called("refdes")
            found = next((p.text.strip() for p in placed.properties if folded(p.name) in names and p.text.strip()), "")
        # R? is a symbol that was never numbered
        return placed.name.original if not found or found.endswith("?") else found

    def _instance(self, placed: Placed, target: Cell | None, on_pin: Mapping[str, str], level: _Level) -> Instance:
        pins: dict[str, str] = {}
        ports: dict[str, str] = {}
        for key, net in on_pin.items():
            port = target.ports.get(key) if target is not None else None
            original = port.name.original if port is not None else key
            number = placed.pins.get(key) or (port.designator if port is not None else "") or original
            pins[number] = net
            ports[number] = original
        properties = placed.properties
        if target is not None and target.properties:
            stated = {p.name.casefold() for p in properties if p.text.strip()}
            properties = properties + [p for p in target.properties if p.name.casefold() not in stated]
        if len(placed.properties) > 1:
            self._contradictions(placed)
        name = self._name(placed)
        cell = target.name if target is not None else placed.cell[1]
        symbol = placed.designator or (target.designator if target is not None else "")
        place = Place(self.design.file, placed.line)
        return Instance(level.path + name, name, cell, tuple(properties), pins, place, ports, symbol)

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
