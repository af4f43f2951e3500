"""A board after reading: one circuit for each operating mode, requirements and what the reading had to say."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from netaudit.circuit.export_summary import ExportSummary
from netaudit.devices.base import Device
from netaudit.finding import Finding
from netaudit.parts.part import Part
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity


@dataclass(frozen=True)
class HeatPath:
    """``same-heat``: devices on one path with R_th (K/W) to ambient; each has its own R_th_jc to the path."""

    devices: tuple[str, ...]
    R_th: Quantity
    place: Place


@dataclass(frozen=True)
class Expectation:
    """``expect``: a requirement.  ``quantity`` is voltage, current, power or temperature; ``nets`` one or two nets for a
    voltage, else ``device`` and perhaps ``pin``; ``low``/``high`` in SI units, infinite where one-sided; ``mode`` None
    means every mode."""

    quantity: str
    nets: tuple[str, ...]
    device: str | None
    pin: str | None
    low: float
    high: float
    mode: str | None
    place: Place


@dataclass(frozen=True)
class Circuit:
    """One mode: the devices that are fitted, resolved.

    ``nets`` in the order of their first mention (private nets of blocks as ``A1/n1``; a pin left open with ``nc`` has a
    net of its own that is not in ``nets``, see ``Device.open_pins``); ``grounds`` the reference nets (0 V).
    """

    mode: str
    devices: tuple[Device, ...]
    nets: tuple[str, ...]
    grounds: tuple[str, ...]
    ambient: Quantity
    heat_paths: tuple[HeatPath, ...] = ()
    omitted: tuple[str, ...] = ()
    #: packages of several devices by designator: their devices are called ``U1/...``
    packages: Mapping[str, tuple[Part, Place]] = field(default_factory=dict)

    def device(self, name: str) -> Device:
        """The fitted device of that designator; KeyError when there is none."""
        return next(d for d in self.devices if d.name == name)


@dataclass(frozen=True)
class Board:
    """A netlist with its part tables, expanded: every mode's circuit, the requirements, findings of the reading itself
    (``part/unknown``, ``part/kind``, ...), and the SHA-256 of each file that was read."""

    name: str
    title: str
    circuits: tuple[Circuit, ...]
    expectations: tuple[Expectation, ...]
    ambient_stated: bool
    findings: tuple[Finding, ...] = ()
    files: Mapping[str, str] = field(default_factory=dict)
    cautions: tuple[str, ...] = ()
    exports: tuple[ExportSummary, ...] = ()
    #: for parts of exports: the row name that would be found for them, and what the export says of them
    known: Mapping[str, tuple[str, str]] = field(default_factory=dict)
