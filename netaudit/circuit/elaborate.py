"""A netlist to a Board: tables, blocks, modes, requirements."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace

from netaudit.circuit.blocks import Opener
from netaudit.circuit.build import Builder, covered
from netaudit.circuit.circuit import Board, Circuit, Expectation, HeatPath
from netaudit.circuit.export_summary import ExportSummary
from netaudit.circuit.packages import opened_packages, package_statement, packages_in
from netaudit.circuit.raw import RawDevice, Spec, changed, sort_items
from netaudit.devices import KINDS
from netaudit.devices.base import Device
from netaudit.failure import InputError
from netaudit.parts.part import Part
from netaudit.parts.tables import PartTable, common_table, read_table
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity, exact
from netaudit.quantities.read import read_quantity, read_span
from netaudit.syntax.export_settings import DEFAULTS, ExportSettings
from netaudit.syntax.statements import (
    AmbientStatement,
    BlockStatement,
    ChangeStatement,
    CoveredStatement,
    DeviceStatement,
    ExpectStatement,
    ExportStatement,
    GroundStatement,
    ModeStatement,
    Netlist,
    OmitStatement,
    PartsStatement,
    PlaceStatement,
    SetStatement,
    TitleStatement,
    Word,
)
from netaudit.syntax.suggest import closest

_AMBIENT = exact(25.0, "degC")
_EXPECTED = {"voltage": "V", "current": "A", "power": "W", "temperature": "degC"}


@dataclass
class _Mode:
    """What a mode changes, after the top level's changes."""

    name: str
    changes: list[ChangeStatement] = field(default_factory=list)
    place: Place | None = None


def elaborate(netlist: Netlist, table: PartTable | None = None, settings: ExportSettings = DEFAULTS) -> Board:
    """The board of a netlist; ``table`` (for example a project's) comes before the netlist's own part tables,
    ``settings`` say how its exports are mapped."""
    return Elaboration(netlist, table or PartTable(), settings).board()


class Elaboration:
    """Works a netlist out, room by room."""

    def __init__(self, netlist: Netlist, table: PartTable, settings: ExportSettings) -> None:
        self.netlist = netlist
        self.settings = settings
        self.exports: list[ExportSummary] = []
        self.left_out: list[str] = []
        self.known: dict[str, tuple[str, str]] = {}
        self.cautions: list[str] = []
        tables = [s for s in netlist.statements if isinstance(s, PartsStatement)]
        for statement in tables:
            table = table.merge(self._table(statement))
        self.cautions += table.overridden
        self.table = table
        self.builder = Builder(table, netlist.root)
        self.grounds = tuple(dict.fromkeys(s.net.text for s in netlist.statements if isinstance(s, GroundStatement)))
        self.blocks = self._blocks()
        self.packages: dict[str, tuple[Part, Place]] = {}
        exported, packages = self._exported()
        self.packages |= packages_in(netlist.statements, table)
        statements = opened_packages(netlist.statements, table, self.blocks)
        self.opened = Opener(self.blocks, frozenset(self.grounds)).open([*packages, *statements])
        self.raws: dict[str, RawDevice] = {}
        for raw in [*exported, *self.opened.devices]:
            if raw.name in self.raws:
                first = self.raws[raw.name].place
                raise InputError(
                    f"designator {raw.name} stands twice (first at {first.file}:{first.line})",
                    place=raw.place,
                    mend="rename one of them",
                )
            self.raws[raw.name] = raw
        self.nets = self._net_names()
        self.covers = self._covers()
        self.heat = self._heat()

    def _table(self, statement: PartsStatement) -> PartTable:
        if not statement.file.quoted and statement.file.text == "common":
            return common_table()
        return read_table(statement.path, statement.file.text, statement.place)

    def _blocks(self) -> dict[str, BlockStatement]:
        found: dict[str, BlockStatement] = {}
        for s in self.netlist.statements:
            if not isinstance(s, BlockStatement):
                continue
            if s.name.text in KINDS:
                raise InputError(f"a block may not be called {s.name.text}, like a kind", place=s.name.place)
            if s.name.text in found:
                raise InputError(f"block {s.name.text} is defined twice", place=s.name.place, mend="rename one of them")
            found[s.name.text] = s
        return found

    def _exported(self) -> tuple[list[RawDevice], list[DeviceStatement]]:
        """Devices and packages of included exports, the tables of one board taken together."""
        exports = [s.export for s in self.netlist.statements if isinstance(s, ExportStatement)]
        if not exports:
            return [], []
        from netaudit.circuit.mapping import map_export
        from netaudit.syntax.tables import merged

        tables = [e for e in exports if e.file.lower().endswith(".csv")]
        drawn = [e for e in exports if not e.file.lower().endswith(".csv")]
        devices: list[RawDevice] = []
        packages: list[DeviceStatement] = []
        for export in [*drawn, *([merged(tables)] if tables else [])]:
            mapped = map_export(export, self.table, self.settings)
            self.exports.append(mapped.summary)
            self.left_out += mapped.omitted
            self.known |= mapped.known
            devices += mapped.devices
            packages += [package_statement(i, part, self.blocks) for i, part in mapped.packages]
            self.packages |= {i.name: (part, i.place) for i, part in mapped.packages}
            self.cautions += mapped.remarks
            for finding in mapped.findings:
                self.builder.findings[(finding.rule, finding.device or "")] = finding
        return devices, packages

    def _net_names(self) -> tuple[str, ...]:
        nets = dict.fromkeys(self.grounds)
        for raw in self.raws.values():
            nets.update(dict.fromkeys(net for net in raw.pins.values() if net is not None))
        return tuple(nets)

    def _known(self, word: Word, prefix: str = "") -> str:
        """The full designator a word names; InputError with the closest one when there is none."""
        name = f"{prefix}{word.text}"
        if name not in self.raws:
            near = closest(name, list(self.raws))
            hint = f"did you mean {near}?" if near else "check the designator"
            raise InputError(f"there is no device {name}", place=word.place, mend=hint)
        return name

    def _known_net(self, word: Word) -> str:
        if word.text not in self.nets:
            near = closest(word.text, list(self.nets))
            hint = f"did you mean {near}?" if near else "check the name of the net"
            raise InputError(f"there is no net {word.text}", place=word.place, mend=hint)
        return word.text

    def _known_pin(self, device: str, pin: str, place: Place) -> str:
        pins = self.raws[device].pins
        pin = pin if pin in pins else self.raws[device].aliases.get(pin, pin)
        if pin not in pins:
            raise InputError(f"{device} has no pin {pin}", place=place, mend=f"it has {' '.join(pins)}")
        return pin

    def _covers(self) -> dict[str, tuple[str, dict[tuple[str, str], Quantity]]]:
        found: dict[str, tuple[str, dict[tuple[str, str], Quantity]]] = {}
        for prefix, s in self.opened.covered:
            name = self._known(s.designator, prefix)
            if name in found:
                raise InputError(f"{name} is covered twice", place=s.place, mend="keep one line")
            found[name] = (s.reason.text, self._draws(name, s))
        return found

    def _draws(self, name: str, statement: CoveredStatement) -> dict[tuple[str, str], Quantity]:
        draws: dict[tuple[str, str], Quantity] = {}
        for draw in statement.draws:
            pair = (
                self._known_pin(name, draw.source.text, draw.source.place),
                self._known_pin(name, draw.sink.text, draw.sink.place),
            )
            if pair in draws:
                raise InputError(f"{name}: {pair[0]}:{pair[1]} draws twice", place=draw.source.place)
            draws[pair] = read_quantity(draw.value.text, "A", draw.value.place)
        return draws

    def _heat(self) -> tuple[HeatPath, ...]:
        paths = []
        taken: dict[str, Place] = {}
        for prefix, s in self.opened.heat:
            names = tuple(self._known(w, prefix) for w in s.designators)
            for name, word in zip(names, s.designators, strict=True):
                if name in taken:
                    raise InputError(f"{name} is on two heat paths", place=word.place, mend="keep it on one")
                taken[name] = s.place
            r = read_quantity(s.R_th.text, "K/W", s.R_th.place)
            if r.low < 0:
                raise InputError("a thermal resistance below zero", place=s.R_th.place)
            paths.append(HeatPath(names, r, s.place))
        return tuple(paths)

    def _modes(self) -> list[_Mode]:
        modes: dict[str, _Mode] = {}
        if self.netlist.only_modes is None:
            modes["normal"] = _Mode("normal")
        written: set[str] = set()
        for s in self.netlist.statements:
            if not isinstance(s, ModeStatement):
                continue
            if s.name.text in written:
                raise InputError(f"mode {s.name.text!r} is defined twice", place=s.name.place, mend="join the two")
            written.add(s.name.text)
            modes[s.name.text] = _Mode(s.name.text, list(s.changes), s.place)
        if not modes:
            place = self.netlist.only_modes
            raise InputError("only modes, but no mode is defined", place=place, mend="add a mode, or remove this line")
        return list(modes.values())

    def _parts_of(self, name: str) -> list[str]:
        """The designator, or those of the devices in a package."""
        return [name] if name in self.raws else [n for n in self.raws if n.startswith(f"{name}/")]

    def _applied(self, changes: Iterable[ChangeStatement], state: _State) -> None:
        for change in changes:
            if isinstance(change, AmbientStatement):
                state.ambient = ambient(change)
            elif isinstance(change, SetStatement):
                name = self._known(change.designator)
                raw = self.raws[name]
                new = sort_items(name, raw.kind, change.items)
                state.specs[name] = changed(state.specs.get(name, raw.spec), new)
            elif isinstance(change, OmitStatement):
                state.omitted |= {self._known(w) for w in change.designators}
            else:
                state.omitted -= {self._known(w) for w in change.designators}

    def _top(self) -> _State:
        state = _State(_AMBIENT, omitted={raw for name in self.left_out for raw in self._parts_of(name)})
        kept = (AmbientStatement, SetStatement, OmitStatement, PlaceStatement)
        self._applied([s for s in self.netlist.statements if isinstance(s, kept)], state)
        return state

    def board(self) -> Board:
        top = self._top()
        base: dict[str, Device] = {}
        modes = self._modes()
        circuits = tuple(self._circuit(mode, top, base) for mode in modes)
        titles = [s.text.text for s in self.netlist.statements if isinstance(s, TitleStatement)]
        stated = any(isinstance(s, AmbientStatement) for s in self.netlist.statements)
        return Board(
            self.netlist.name,
            titles[0] if titles else "",
            circuits,
            self._expectations({m.name for m in modes}),
            stated,
            tuple(self.builder.findings.values()),
            {**self.netlist.files, **self.table.files, **self.builder.files},
            tuple(self.cautions),
            tuple(self.exports),
            self.known,
        )

    def _circuit(self, mode: _Mode, top: _State, base: dict[str, Device]) -> Circuit:
        state = _State(top.ambient, dict(top.specs), set(top.omitted))
        self._applied(mode.changes, state)
        devices = []
        for name, raw in self.raws.items():
            if name in state.omitted:
                continue
            if state.specs.get(name) is top.specs.get(name):
                if name not in base:
                    base[name] = self._device(raw, top.specs.get(name))
                devices.append(base[name])
            else:
                devices.append(self._device(raw, state.specs[name]))
        paths = tuple(p for p in self.heat if any(d not in state.omitted for d in p.devices))
        omitted = tuple(n for n in self.raws if n in state.omitted)
        return Circuit(mode.name, tuple(devices), self.nets, self.grounds, state.ambient, paths, omitted, self.packages)

    def _device(self, raw: RawDevice, spec: Spec | None) -> Device:
        device = self.builder.build(raw if spec is None else replace(raw, spec=spec))
        if raw.name in self.covers:
            reason, draws = self.covers[raw.name]
            device = covered(device, reason, draws)
        return device

    def _expectations(self, modes: set[str]) -> tuple[Expectation, ...]:
        found = []
        for s in self.netlist.statements:
            if isinstance(s, ExpectStatement):
                found.append(self._expectation(s, modes))
        return tuple(found)

    def _expectation(self, s: ExpectStatement, modes: set[str]) -> Expectation:
        unit = _EXPECTED.get(s.quantity.text)
        if unit is None:
            near = closest(s.quantity.text, list(_EXPECTED))
            mend = f"did you mean {near}?" if near else f"one of {', '.join(_EXPECTED)}"
            raise InputError(f"nothing is known of {s.quantity.text!r}", place=s.quantity.place, mend=mend)
        if s.mode is not None and s.mode.text not in modes:
            near = closest(s.mode.text, sorted(modes))
            mend = f"did you mean {near!r}?" if near else f"there are {', '.join(sorted(modes))}"
            raise InputError(f"there is no mode {s.mode.text!r}", place=s.mode.place, mend=mend)
        low, high = read_span(s.span.text, unit, s.span.place, one_sided=True)
        mode = s.mode.text if s.mode is not None else None
        if unit == "V":
            nets = tuple(self._known_net(w) for w in s.targets)
            return Expectation("voltage", nets, None, None, low, high, mode, s.place)
        device = self._known(s.targets[0])
        pin = self._known_pin(device, s.pin.text, s.pin.place) if s.pin is not None else None
        if unit == "A" and pin is None and len(self.raws[device].pins) > 2:
            pins = " ".join(self.raws[device].pins)
            raise InputError(
                f"{device} has more than two pins: which current?",
                place=s.targets[0].place,
                mend=f"write {device}:PIN with one of {pins}",
            )
        return Expectation(s.quantity.text, (), device, pin, low, high, mode, s.place)


@dataclass
class _State:
    """What holds in a mode: ambient, specs that differ from the statements, and what is not fitted."""

    ambient: Quantity
    specs: dict[str, Spec] = field(default_factory=dict)
    omitted: set[str] = field(default_factory=set)


def ambient(statement: AmbientStatement) -> Quantity:
    """``ambient T [low..high]``."""
    words: Sequence[Word] = statement.words
    return read_quantity(",".join(w.text for w in words), "degC", words[0].place)
