"""EDIF forms to cells: libraries, ports, instances, nets, each by its key and with its original name."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.export import Property
from netaudit.syntax.forms import Form, identifier, plain, string

CellKey = tuple[str, str]
#: SI value of the units that numberDefinition may scale, by their EDIF names, and how a property names them
_UNITS = {
    "resistance": "ohm",
    "capacitance": "F",
    "inductance": "H",
    "voltage": "V",
    "current": "A",
    "power": "W",
    "temperature": "K",
    "time": "s",
    "frequency": "Hz",
}


@dataclass(frozen=True)
class Name:
    """A defined name: its key (case-insensitive), the name people gave it, and the size of an array (0: none)."""

    key: str
    original: str
    size: int = 0


@dataclass
class Port:
    name: Name
    designator: str = ""


@dataclass
class Placed:
    """An instance as drawn in one cell; ``pins`` maps port keys (with an index for array members) to package pins."""

    name: Name
    cell: CellKey
    designator: str
    properties: list[Property]
    pins: dict[str, str]
    line: int


@dataclass
class Joined:
    """One pin on a net: the port's key, and the instance's key (empty: a port of the cell itself)."""

    port: str
    instance: str
    line: int


@dataclass
class Wire:
    name: Name
    joined: list[Joined]
    line: int


@dataclass
class Cell:
    key: CellKey
    name: str
    line: int
    ports: dict[str, Port] = field(default_factory=dict)
    placed: dict[str, Placed] = field(default_factory=dict)
    wires: list[Wire] = field(default_factory=list)
    properties: list[Property] = field(default_factory=list)
    designator: str = ""


@dataclass
class Design:
    """All cells by library and name, the top cell, and remarks on what was skipped."""

    file: str
    cells: dict[CellKey, Cell]
    top: Cell
    remarks: list[str]


class Reader:
    """Reads the outermost form of one file."""

    def __init__(self, form: Form, file: str) -> None:
        self.file = file
        self.form = form
        self.cells: dict[CellKey, Cell] = {}
        self.remarks: list[str] = []
        self.scales: dict[str, float] = {}

    def place(self, line: int) -> Place:
        return Place(self.file, line)

    def fail(self, what: str, line: int, mend: str = "") -> InputError:
        return InputError(what, place=self.place(line), mend=mend)

    def read(self) -> Design:
        if self.form.keyword != "edif":
            raise self.fail(
                f"this is not an EDIF file: it begins with ({self.form.keyword}",
                self.form.line,
                "it must begin with (edif ...)",
            )
        for library in self.form.forms("library", "external"):
            self._library(library)
        return Design(self.file, self.cells, self._top(), self.remarks)

    def _library(self, library: Form) -> None:
        name = self.name_of(library)
        for definition in (n for t in library.forms("technology") for n in t.forms("numberdefinition")):
            self._scales(definition)
        for form in library.forms("cell"):
            cell = self._cell(form, name.key)
            self.cells[cell.key] = cell

    def _scales(self, definition: Form) -> None:
        """``(scale EDIFNUM UNITNUM (unit U))``: one EDIF number stands for UNITNUM / EDIFNUM in SI units."""
        for scale in definition.forms("scale"):
            numbers = [n for n in (self.number(i) for i in scale.items) if n is not None]
            unit = scale.first("unit")
            if len(numbers) >= 2 and numbers[0] and unit is not None and unit.atoms():
                self.scales[unit.atoms()[0].lower()] = numbers[1] / numbers[0]

    def _cell(self, form: Form, library: str) -> Cell:
        name = self.name_of(form)
        cell = Cell((library, name.key), name.original, form.line)
        views = list(form.forms("view"))
        drawn = [v for v in views if v.first("contents") is not None]
        for interface in (i for v in views for i in v.forms("interface")):
            self._interface(interface, cell)
        if len(drawn) > 1:
            self.remarks.append(f"cell {name.original} has several views with contents: the first is read")
        for contents in (c for v in drawn[:1] for c in v.forms("contents")):
            self._contents(contents, cell, library)
        cell.properties += [self.property_of(p) for v in views for p in v.forms("property")]
        cell.properties += [self.property_of(p) for p in form.forms("property")]
        return cell

    def _interface(self, interface: Form, cell: Cell) -> None:
        for port in self._ports(interface):
            name = self.name_of(port)
            designator = self.designator_of(port)
            for key, original in members(name):
                cell.ports.setdefault(key, Port(Name(key, original), designator if not name.size else ""))
        cell.properties += [self.property_of(p) for p in interface.forms("property")]
        cell.designator = cell.designator or self.designator_of(interface)

    def _ports(self, interface: Form) -> Iterator[Form]:
        waiting = [interface]
        while waiting:
            form = waiting.pop()
            for inner in form.forms("port", "portbundle", "listofports"):
                if inner.keyword == "port":
                    yield inner
                else:
                    waiting.append(inner)

    def _contents(self, contents: Form, cell: Cell, library: str) -> None:
        for form in contents.forms():
            if form.keyword == "instance":
                self._instance(form, cell, library)
            elif form.keyword in ("net", "netbundle"):
                self._wires(form, cell)
            elif form.keyword == "page":
                # a schematic's page holds instances and nets like the contents themselves
                self._contents(form, cell, library)

    def _instance(self, form: Form, cell: Cell, library: str) -> None:
        name = self.name_of(form)
        view = form.first("viewref") or next((v for vl in form.forms("viewlist") for v in vl.forms("viewref")), None)
        reference = view.first("cellref") if view is not None else form.first("cellref")
        target = self.cell_key(reference, library) if reference is not None else ("", "")
        pins: dict[str, str] = {}
        for inner in form.forms("portinstance"):
            ref = inner.first("portref")
            key = self.port_key(ref) if ref is not None else identifier(inner.atoms()[0]) if inner.atoms() else ""
            pins[key] = self.designator_of(inner)
        properties = [self.property_of(p) for p in form.forms("property")]
        for key, original in members(name):
            if key in cell.placed:
                self.remarks.append(f"line {form.line}: instance {original} is defined twice in cell {cell.name}")
                key = f"{key}\0{form.line}"
            cell.placed[key] = Placed(
                Name(key, original), target, self.designator_of(form), properties, pins, form.line
            )

    def _wires(self, form: Form, cell: Cell) -> None:
        """A net with the nets inside it (parts of the same net), or the nets of a bundle."""
        waiting = [(form, None)] if form.keyword == "net" else [(f, None) for f in _bundled(form)]
        stack: list[tuple[Form, Wire | None]] = list(reversed(waiting))
        while stack:
            net, parent = stack.pop()
            wire = parent
            if wire is None:
                wire = Wire(self.name_of(net), [], net.line)
                cell.wires.append(wire)
            for joined in net.forms("joined"):
                wire.joined += self._joined(joined)
            stack += [(inner, wire) for inner in net.forms("net")]
            for instance in net.forms("instance"):
                self._instance(instance, cell, cell.key[0])

    def _joined(self, joined: Form) -> Iterator[Joined]:
        for ref in joined.forms():
            if ref.keyword == "portref":
                yield self._pin(ref)
            elif ref.keyword == "portlist":
                yield from (self._pin(inner) for inner in ref.forms("portref"))
            elif ref.keyword == "globalportref":
                self.remarks.append(f"line {ref.line}: a globalPortRef is not followed")

    def _pin(self, ref: Form) -> Joined:
        key = self.port_key(ref)
        instance = ref.first("instanceref")
        if instance is None and (deeper := ref.first("portref")) is not None:
            instance = deeper.first("instanceref")
        return Joined(key, self.member_key(instance) if instance is not None else "", ref.line)

    def port_key(self, ref: Form) -> str:
        return self.member_key(ref)

    def member_key(self, ref: Form) -> str:
        """The key a reference names: an identifier, or ``(member NAME int)``."""
        member = ref.first("member")
        if member is not None:
            atoms = member.atoms()
            return identifier(atoms[0]) + "".join(f"[{a}]" for a in atoms[1:])
        atoms = ref.atoms()
        if not atoms:
            raise self.fail(f"({ref.keyword}) names nothing", ref.line)
        return identifier(atoms[0])

    def cell_key(self, reference: Form, library: str) -> CellKey:
        inside = reference.first("libraryref")
        atoms = reference.atoms()
        if not atoms:
            raise self.fail("(cellRef) names no cell", reference.line)
        return (
            identifier(inside.atoms()[0]) if inside is not None and inside.atoms() else library,
            identifier(atoms[0]),
        )

    def name_of(self, form: Form) -> Name:
        """The name that a form defines, its first item: IDENT, (rename IDENT "original"), (array NAME size), (name …)."""
        item = form.items[0] if form.items else None
        if isinstance(item, str):
            return Name(identifier(item), string(item) if item.startswith('"') else plain(item))
        if item is None:
            raise self.fail(f"({form.keyword}) has no name", form.line)
        if item.keyword == "rename":
            return self._renamed(item)
        if item.keyword == "array":
            inner = self.name_of(item)
            sizes = [int(a) for a in item.items[1:] if isinstance(a, str) and a.isdigit()]
            size = 1
            for s in sizes:
                size *= s
            if size > 100_000:
                raise self.fail(f"an array of {size} members", item.line, "at most 100000 are read")
            return Name(inner.key, inner.original, size)
        if item.keyword == "name" and item.atoms():
            return Name(identifier(item.atoms()[0]), plain(item.atoms()[0]))
        raise self.fail(f"({form.keyword} ({item.keyword} …)): a name was expected", item.line)

    def _renamed(self, item: Form) -> Name:
        atoms = item.atoms()
        texts = [a for a in atoms if a.startswith('"')] + [
            a for inner in item.forms("stringdisplay", "name") for a in inner.atoms()
        ]
        ident = atoms[0] if atoms else next((a for f in item.forms("name") for a in f.atoms()), "")
        if not ident:
            raise self.fail("(rename) without an identifier", item.line)
        original = next((a for a in texts if a.startswith('"')), ident)
        return Name(identifier(ident), string(original) if original.startswith('"') else plain(original))

    def designator_of(self, form: Form) -> str:
        inner = form.first("designator")
        if inner is None:
            return ""
        atoms = inner.atoms() or [a for f in inner.forms("stringdisplay") for a in f.atoms()]
        return string(atoms[0]).strip() if atoms else ""

    def property_of(self, form: Form) -> Property:
        name = self.name_of(form).original
        unit_form = form.first("unit")
        unit = unit_form.atoms()[0].lower() if unit_form is not None and unit_form.atoms() else ""
        for typed in form.forms("string", "integer", "number", "boolean", "minomax", "point"):
            return self._typed(name, typed, unit)
        loose = form.items[1] if len(form.items) > 1 and isinstance(form.items[1], str) else ""
        return Property(name, string(loose))

    def _typed(self, name: str, typed: Form, unit: str) -> Property:
        if typed.keyword == "string":
            atoms = typed.atoms() or [a for f in typed.forms("stringdisplay") for a in f.atoms()]
            return Property(name, string(atoms[0]) if atoms else "")
        if typed.keyword == "boolean":
            return Property(name, "true" if typed.first("true") is not None else "false")
        items = list(typed.items)
        if typed.keyword == "minomax":
            items = [i for i in items if self.number(i) is not None][1:2] or items[:1]
        value = next((n for n in (self.number(i) for i in items) if n is not None), None)
        if value is None:
            return Property(name, "")
        scaled = value * self.scales.get(unit, 1.0)
        return Property(name, f"{scaled:.12g}", scaled, _UNITS.get(unit, unit))

    def number(self, item: Form | str) -> float | None:
        """``150`` or ``(e 5 -2)`` = 5e-2; None when it is neither."""
        if isinstance(item, Form):
            atoms = item.atoms()
            if item.keyword != "e" or len(atoms) != 2:
                return None
            text = f"{atoms[0]}e{atoms[1]}"
        else:
            text = item
        try:
            return float(text)
        except ValueError:
            return None

    def _top(self) -> Cell:
        for design in self.form.forms("design"):
            reference = design.first("cellref")
            if reference is None:
                continue
            key = self.cell_key(reference, "")
            if key not in self.cells:
                raise self.fail(
                    f"the design names cell {key[1]} of library {key[0]}, which is not there", reference.line
                )
            return self.cells[key]
        drawn = [c for c in self.cells.values() if c.placed]
        if not drawn:
            raise self.fail("no cell with instances in it, and no (design …) that names one", self.form.line)
        self.remarks.append(f"no (design …): the last cell with contents, {drawn[-1].name}, is taken as the top")
        return drawn[-1]


def members(name: Name) -> list[tuple[str, str]]:
    """Keys and original names: one, or one for each member of an array."""
    if not name.size:
        return [(name.key, name.original)]
    return [(f"{name.key}[{k}]", f"{name.original}[{k}]") for k in range(name.size)]


def _bundled(bundle: Form) -> Iterator[Form]:
    for inner in bundle.forms("listofnets", "net"):
        if inner.keyword == "net":
            yield inner
        else:
            yield from inner.forms("net")
