"""EDIF forms to cells: libraries, ports, instances, nets, each by its key and with its original name."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

from netaudit.syntax.edif_names import NOT_NAMED, Name, Names, members
from netaudit.syntax.export import Property
from netaudit.syntax.export_settings import DEFAULTS, ExportSettings, folded
from netaudit.syntax.forms import Form

CellKey = tuple[str, str]
#: the view whose contents are read where several have them
_VIEWS = ("netlist", "schematic", "logicmodel")


@dataclass(slots=True)
class Port:
    name: Name
    designator: str = ""


@dataclass(slots=True)
class Placed:
    """An instance as drawn in one cell; ``pins`` maps port keys (with an index for array members) to package pins."""

    name: Name
    cell: CellKey
    designator: str
    properties: list[Property]
    pins: dict[str, str]
    line: int


@dataclass(slots=True)
class Joined:
    """One pin on a net: the port's key, and the instance's key (empty: a port of the cell itself; None: a global)."""

    port: str
    instance: str | None
    line: int


@dataclass(slots=True)
class Wire:
    """A net as drawn: its name, what it joins, and the page it stands on (0: none)."""

    name: Name
    joined: list[Joined]
    line: int
    page: int = 0


@dataclass
class Cell:
    """A cell; ``arrays`` maps the key of an array port to the keys of its members, ``off_page`` are keys of connectors
    between its pages."""

    key: CellKey
    name: str
    line: int
    ports: dict[str, Port] = field(default_factory=dict)
    arrays: dict[str, list[str]] = field(default_factory=dict)
    off_page: dict[str, str] = field(default_factory=dict)
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


class Reader(Names):
    """Reads the outermost form of one file."""

    def __init__(self, form: Form, file: str, settings: ExportSettings = DEFAULTS) -> None:
        super().__init__(file)
        self.form = form
        self.settings = settings
        self.cells: dict[CellKey, Cell] = {}
        self.remarks: list[str] = []
        self.pages = 0

    def read(self) -> Design:
        if self.form.keyword != "edif":
            raise self.fail(
                f"this is not an EDIF file: it begins with ({self.form.keyword}",
                self.form.line,
                "it must begin with (edif ...)",
            )
        self._version()
        for library in self.form.forms("library", "external"):
            self._library(library)
        return Design(self.file, self.cells, self._top(), self.remarks)

    def _version(self) -> None:
        version = self.form.first("edifversion")
        if version is not None and version.atoms()[:1] != ["2"]:
            self.remarks.append(f"line {version.line}: EDIF {' '.join(version.atoms())}: read as EDIF 2 0 0")

    def _library(self, library: Form) -> None:
        name = self.name_of(library)
        self.scales = {}
        for definition in (n for t in library.forms("technology") for n in t.forms("numberdefinition")):
            self._scales(definition)
        for form in library.forms("cell"):
            cell = self._cell(form, name.key)
            known = self.cells.get(cell.key)
            if known is not None:
                self.remarks.append(
                    f"line {form.line}: cell {cell.name} is defined twice in one library (first in line {known.line}): "
                    "the later one is read"
                )
            self.cells[cell.key] = cell

    def _scales(self, definition: Form) -> None:
        """``(scale EDIFNUM UNITNUM (unit U))``: one EDIF number stands for UNITNUM / EDIFNUM in SI units."""
        for scale in definition.forms("scale"):
            numbers = [n for n in (self.number(i) for i in scale.items) if n is not None]
            unit = scale.first("unit")
            if len(numbers) >= 2 and numbers[0] and unit is not None and unit.atom():
                self.scales[unit.atom().lower()] = numbers[1] / numbers[0]

    def _cell(self, form: Form, library: str) -> Cell:
        name = self.name_of(form)
        cell = Cell((library, name.key), name.original, form.line)
        views = list(form.forms("view"))
        for interface in (i for v in views for i in v.forms("interface")):
            self._interface(interface, cell)
        drawn = sorted((v for v in views if v.first("contents") is not None), key=_preference)
        if len(drawn) > 1:
            self.remarks.append(
                f"cell {name.original} has several views with contents: {self.name_of(drawn[0]).original} is read"
            )
        for contents in (c for v in drawn[:1] for c in v.forms("contents")):
            self._contents(contents, cell, library, 0)
        cell.properties += [self.property_of(p) for v in views for p in v.forms("property")]
        cell.properties += [self.property_of(p) for p in form.forms("property")]
        return cell

    def _interface(self, interface: Form, cell: Cell) -> None:
        for port in self._ports(interface):
            name = self.name_of(port)
            keys = []
            for member in members(name):
                cell.ports.setdefault(member.key, Port(member, "" if name.sizes else self._pin_number(port)))
                keys.append(member.key)
            if name.sizes:
                cell.arrays[name.key] = keys
        cell.properties += [self.property_of(p) for p in interface.forms("property")]
        cell.designator = cell.designator or self.designator_of(interface)

    def _pin_number(self, form: Form) -> str:
        """The package pin: the designator, else a property that the settings call a pin."""
        found = self.designator_of(form)
        if found:
            return found
        for p in form.forms("property"):
            read = self.property_of(p)
            if folded(read.name) in self.settings.called("pin") and read.text.strip():
                return read.text.strip()
        return ""

    def _ports(self, interface: Form) -> Iterator[Form]:
        waiting = [interface]
        while waiting:
            form = waiting.pop()
            for inner in form.forms("port", "portbundle", "listofports"):
                if inner.keyword == "port":
                    yield inner
                else:
                    waiting.append(inner)

    def _contents(self, contents: Form, cell: Cell, library: str, page: int) -> None:
        for form in contents.forms():
            if form.keyword == "instance":
                self._instance(form, cell, library)
            elif form.keyword == "net":
                self._wires([form], cell, page)
            elif form.keyword == "netbundle":
                self._wires(list(_bundled(form)), cell, page)
            elif form.keyword == "offpageconnector":
                name = self.name_of(form)
                cell.off_page[name.key] = name.original
            elif form.keyword == "page" and not page:
                # a schematic's page holds instances and nets like the contents themselves
                self.pages += 1
                self._contents(form, cell, library, self.pages)
            # what is read is let go: the cells take the memory of the forms
            form.items.clear()

    def _instance(self, form: Form, cell: Cell, library: str) -> None:
        name = self.name_of(form)
        view = form.first("viewref") or next((v for vl in form.forms("viewlist") for v in vl.forms("viewref")), None)
        reference = view.first("cellref") if view is not None else form.first("cellref")
        target = self.cell_key(reference, library) if reference is not None else ("", "")
        pins: dict[str, str] = {}
        for inner in form.forms("portinstance"):
            ref = inner.first("portref")
            pins[self.member_key(ref if ref is not None else inner)] = self._pin_number(inner)
        properties = [self.property_of(p) for p in form.forms("property")]
        designator = self.designator_of(form)
        for member in members(name):
            key = member.key
            if key in cell.placed:
                self.remarks.append(
                    f"line {form.line}: instance {member.original} is defined twice in cell {cell.name}"
                )
                key = f"{key}\0{form.line}"
            cell.placed[key] = Placed(
                Name(key, member.original), target, "" if name.sizes else designator, properties, pins, form.line
            )

    def _wires(self, nets: list[Form], cell: Cell, page: int) -> None:
        """Nets with the nets inside them, which are parts of the same net."""
        stack: list[tuple[Form, Wire | None]] = [(net, None) for net in reversed(nets)]
        while stack:
            net, wire = stack.pop()
            if wire is None:
                wire = Wire(self.name_of(net), [], net.line, page)
                cell.wires.append(wire)
            for form in net.forms():
                if form.keyword == "joined":
                    self._joined(form, wire.joined)
                elif form.keyword == "net":
                    stack.append((form, wire))
                elif form.keyword == "instance":
                    self._instance(form, cell, cell.key[0])

    def _joined(self, joined: Form, found: list[Joined]) -> None:
        for ref in joined.forms():
            if ref.keyword == "portref":
                found.append(self._pin(ref))
            elif ref.keyword == "portlist":
                found += [self._pin(inner) for inner in ref.forms("portref")]
            elif ref.keyword == "globalportref":
                found.append(Joined(self.member_key(ref), None, ref.line))

    def _pin(self, ref: Form) -> Joined:
        instance = ref.first("instanceref")
        if instance is None and (deeper := ref.first("portref")) is not None:
            instance = deeper.first("instanceref")
        return Joined(self.member_key(ref), self.member_key(instance) if instance is not None else "", ref.line)

    def _top(self) -> Cell:
        for design in self.form.forms("design"):
            reference = design.first("cellref")
            if reference is None:
                continue
            key = self.cell_key(reference, "")
            cell = find_cell(self.cells, key)
            if cell is None:
                raise self.fail(f"the design names cell {key[1]}{of_library(key)}, which is not there", reference.line)
            return cell
        drawn = [c for c in self.cells.values() if c.placed]
        if not drawn:
            raise self.fail("no cell with instances in it, and no (design …) that names one", self.form.line)
        self.remarks.append(f"no (design …): the last cell with contents, {drawn[-1].name}, is taken as the top")
        return drawn[-1]


def find_cell(cells: dict[CellKey, Cell], key: CellKey) -> Cell | None:
    """The cell of a reference; where that names no library and its own has none, the only one of that name in the
    others."""
    library, wanted = key
    if not library.startswith(NOT_NAMED):
        return cells.get(key)
    found = cells.get((library.removeprefix(NOT_NAMED), wanted))
    if found is not None:
        return found
    same = [c for (_, name), c in cells.items() if name == wanted]
    return same[0] if len(same) == 1 else None


def of_library(key: CellKey) -> str:
    library = key[0].removeprefix(NOT_NAMED)
    return f" of library {library}" if library else ""


def _preference(view: Form) -> int:
    kind = view.first("viewtype")
    word = kind.atom().lower() if kind is not None else ""
    return _VIEWS.index(word) if word in _VIEWS else len(_VIEWS)


def _bundled(bundle: Form) -> Iterator[Form]:
    for inner in bundle.forms("listofnets", "net"):
        if inner.keyword == "net":
            yield inner
        else:
            yield from inner.forms("net")
