"""What a schematic export says, before anyone knows what its parts are: instances, their pins, nets, and remarks."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from netaudit.place import Place


@dataclass(frozen=True, slots=True)
class Property:
    """A property by its original name; ``text`` as written, ``number`` where the export gives one (SI units after the
    export's own scales), ``unit`` as named by the export (empty when it names none)."""

    name: str
    text: str
    number: float | None = None
    unit: str = ""


@dataclass(frozen=True)
class Instance:
    """A part: flattened name (``A1/R1``), reference designator, the cell (symbol, device) it is drawn as, properties in
    order, and its pins: package pin (or port name) to net."""

    name: str
    designator: str
    cell: str
    properties: tuple[Property, ...]
    pins: Mapping[str, str]
    place: Place
    #: port names by package pin, where both are known
    ports: Mapping[str, str] = field(default_factory=dict)
    #: designator of the symbol (``R?``), for instances that have none of their own
    symbol: str = ""

    def value(self, names: tuple[str, ...]) -> Property | None:
        """The first property, not empty, whose name is one of these (compared without case); None when there is none."""
        for wanted in names:
            for p in self.properties:
                if p.name.casefold() == wanted.casefold() and (p.text.strip() or p.number is not None):
                    return p
        return None


@dataclass(frozen=True)
class Export:
    """A whole export: parts and nets in the order of the file, and remarks on what was odd in it."""

    file: str
    instances: tuple[Instance, ...]
    nets: tuple[str, ...]
    remarks: tuple[str, ...] = ()
    encoding: str = "utf-8"
    #: (first net, second net, line) of nets with one name, or names that differ only in letter case
    clashes: tuple[tuple[str, str, int], ...] = ()
