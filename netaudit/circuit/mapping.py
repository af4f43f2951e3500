"""From an export's instances to devices: by the part table, then by the letters of the designator.

Order: part number, then value, looked up in the part table; then designator letters (IEC 81346-2, IEEE 315 and common
practice).  Package pins become terminals by the part's ``pins``; two-pin parts without polarity need none; a polarised
part without a pin map is the finding ``part/no-pin-map``.  What stays unknown becomes ``unmodelled``, by name.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace

from netaudit.circuit.people import read_people
from netaudit.circuit.raw import RawDevice, Spec
from netaudit.devices import KINDS
from netaudit.devices.base import Kind
from netaudit.finding import Finding
from netaudit.parts.part import Part
from netaudit.parts.tables import PartTable
from netaudit.syntax.export import Export, Instance
from netaudit.syntax.statements import Word

PART_NAMES = (
    "part number",
    "partnumber",
    "part_number",
    "mpn",
    "manufacturer part number",
    "part",
    "device",
    "name",
    "comment",
)
VALUE_NAMES = ("value", "val", "comment")
TOLERANCE_NAMES = ("tolerance", "tol")
#: rating symbols by the property names that are read as them
RATING_NAMES: Mapping[str, tuple[str, ...]] = {
    "P_tot": ("p_tot", "power", "max. power dissipation", "power rating", "wattage"),
    "V_R": ("v_r", "vr", "rated voltage", "voltage rating", "max. voltage", "voltage"),
    "I_F": ("i_f", "if", "imax", "max. current", "forward current"),
    "I_max": ("i_max", "rated current", "current rating", "max. current", "imax"),
    "V_max": ("v_max", "element voltage", "max. voltage"),
}
#: designator letters whose kind leaves no choice
LETTERS: Mapping[str, str] = {
    "R": "resistor", "C": "capacitor", "L": "inductor", "D": "diode", "CR": "diode", "VD": "diode", "LED": "led",
    "DS": "led", "HL": "led", "VR": "zener", "J": "connector", "P": "connector", "X": "connector", "CN": "connector",
    "JP": "connector", "XP": "connector", "XS": "connector", "TP": "testpoint",
}  # fmt: skip
_UNIT_LETTER = re.compile(r"^(?P<base>.*?[A-Za-z]+\d+)(?P<unit>[A-Z])$")
_UNITS = {"resistor": "ohm", "capacitor": "F", "inductor": "H"}


@dataclass
class Mapped:
    """What mapping gave: devices, findings, remarks for the report, and counts of (kind, by which rule)."""

    devices: list[RawDevice] = field(default_factory=list)
    findings: list[Finding] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    counts: dict[tuple[str, str], int] = field(default_factory=dict)
    packages: list[tuple[Instance, Part]] = field(default_factory=list)


def map_export(export: Export, table: PartTable) -> Mapped:
    """Devices of an export; nothing is dropped silently."""
    mapped = Mapped(remarks=[f"{export.file}: {r}" for r in export.remarks])
    for instance in gathered(export.instances):
        part = find_part(instance, table)
        if part is not None and part.block is not None:
            mapped.packages.append((instance, part))
            continue
        device, rule = _device(instance, table, mapped)
        mapped.devices.append(device)
        key = (device.kind.name, rule)
        mapped.counts[key] = mapped.counts.get(key, 0) + 1
    mapped.remarks.insert(0, _summary(export, mapped))
    return mapped


def _summary(export: Export, mapped: Mapped) -> str:
    kinds = ", ".join(f"{n} {kind} by {rule}" for (kind, rule), n in sorted(mapped.counts.items(), key=lambda c: -c[1]))
    return f"{export.file}: {len(mapped.devices) + len(mapped.packages)} parts, {len(export.nets)} nets: {kinds}" + (
        f", {len(mapped.packages)} packages of several devices" if mapped.packages else ""
    )


def gathered(instances: Sequence[Instance]) -> list[Instance]:
    """Parts drawn as several units come together: the same designator, or one designator with a unit letter."""
    letters: dict[str, list[Instance]] = {}
    for instance in instances:
        match = _UNIT_LETTER.match(instance.name)
        if match is not None:
            letters.setdefault(match["base"], []).append(instance)
    names = {i.name for i in instances}
    bases = {
        i.name: base
        for base, group in letters.items()
        if len(group) > 1 and base not in names and len({g.cell for g in group}) == 1
        for i in group
    }
    order: dict[str, Instance] = {}
    for instance in instances:
        name = bases.get(instance.name, instance.name)
        known = order.get(name)
        if known is None:
            order[name] = replace(instance, name=name)
        else:
            stated = {p.name.casefold() for p in known.properties}
            more = tuple(p for p in instance.properties if p.name.casefold() not in stated)
            order[name] = replace(known, pins={**instance.pins, **known.pins}, properties=(*known.properties, *more))
    return list(order.values())


def _device(instance: Instance, table: PartTable, mapped: Mapped) -> tuple[RawDevice, str]:
    part = find_part(instance, table)
    if part is not None and part.kind in KINDS:
        kind, rule = KINDS[part.kind or ""], "part table"
    else:
        letters = re.match(r"^(?:.*/)?([A-Za-z]+)", instance.designator)
        name = LETTERS.get(letters[1].upper() if letters else "", "unmodelled")
        kind, rule = KINDS[name], "designator letter" if name != "unmodelled" else "nothing"
    spec = _spec(instance, kind, part, mapped)
    if spec is None:
        return _unknown(instance), "no readable value"
    pins = terminals(instance, kind, part)
    if isinstance(pins, str):
        _no_pin_map(instance, kind, part, pins, mapped)
        return _unknown(instance), "no pin map"
    return RawDevice(instance.name, kind, spec, pins, instance.place), rule


def _unknown(instance: Instance) -> RawDevice:
    return RawDevice(instance.name, KINDS["unmodelled"], Spec(), dict(instance.pins), instance.place)


def find_part(instance: Instance, table: PartTable) -> Part | None:
    """The table row that the export names: part number, then value, then the cell's name."""
    texts = [p.text.strip() for names in (PART_NAMES, VALUE_NAMES) if (p := instance.value(names)) is not None]
    texts += [p.text.strip() for p in instance.properties if p.name.casefold() in (*PART_NAMES, *VALUE_NAMES)]
    for text in [*texts, instance.cell]:
        part = table.get(text) if text else None
        if part is not None:
            return part
    return None


def _spec(instance: Instance, kind: Kind, part: Part | None, mapped: Mapped) -> Spec | None:
    """What stands on the device's line; None when a value that must be known cannot be read."""
    keys: dict[str, Word] = {}
    if part is not None:
        keys["part"] = Word(part.name, instance.place)
    for symbol, names in RATING_NAMES.items():
        _rating(instance, kind, symbol, names, keys, part)
    unit = _UNITS.get(kind.name)
    if unit is None:
        return Spec(keys=keys)
    found = instance.value(VALUE_NAMES)
    written = read_people(found.text, unit) if found is not None else None
    if found is not None and found.number is not None and written is None:
        written = read_people(f"{found.number!r}{unit}", unit)
    if written is None:
        said = f"its value {found.text!r} cannot be read" if found is not None else "it has no value"
        mapped.remarks.append(f"{instance.place.file}:{instance.place.line}: {instance.name}: {said}")
        return None if kind.name == "resistor" else Spec(keys=keys)
    value = Word(written.value, instance.place)
    tolerance = written.tolerance or _tolerance(instance)
    return Spec(value, None, Word(tolerance, instance.place) if tolerance else None, None, keys)


def _tolerance(instance: Instance) -> str:
    found = instance.value(TOLERANCE_NAMES)
    match = re.search(r"(\d+(?:[.,]\d+)?)\s*%", found.text) if found is not None else None
    return f"{match[1].replace(',', '.')}%" if match else ""


def _rating(
    instance: Instance, kind: Kind, symbol: str, names: tuple[str, ...], keys: dict[str, Word], part: Part | None
) -> None:
    if symbol not in kind.ratings or (part is not None and symbol in part.ratings):
        return
    found = instance.value(names)
    if found is None:
        return
    unit = {"P": "W", "V": "V", "I": "A"}[symbol[0]]
    written = read_people(found.text, unit)
    if written is not None:
        keys[symbol] = Word(written.value, instance.place)


def terminals(instance: Instance, kind: Kind, part: Part | None) -> dict[str, str | None] | str:
    """Terminals to nets, or the package pins that cannot be told apart."""
    if not kind.pin_sets:
        return dict(instance.pins)
    named = {**instance.pins, **{port: instance.pins[pin] for pin, port in instance.ports.items()}}
    if part is not None and part.pins:
        out: dict[str, str | None] = {}
        for package, terminal in part.pins.items():
            if package in named and out.setdefault(terminal, named[package]) is None:
                out[terminal] = named[package]
        return _filled(kind, out)
    for pins in kind.pin_sets:
        if set(named) <= set(pins) or set(pins) <= set(named):
            return _filled(kind, {p: named.get(p) for p in pins})
    plain = next((pins for pins in kind.pin_sets if pins == ("1", "2")), None)
    if plain is not None and len(instance.pins) <= 2:
        nets = [*instance.pins.values(), None, None][:2]
        return dict(zip(plain, nets, strict=True))
    return ", ".join(instance.pins) or "none"


def _filled(kind: Kind, pins: dict[str, str | None]) -> dict[str, str | None]:
    """Terminals that the export leaves unconnected stay open."""
    every = kind.pins_for(list(pins))
    return {pin: pins.get(pin) for pin in every}


def _no_pin_map(instance: Instance, kind: Kind, part: Part | None, pins: str, mapped: Mapped) -> None:
    wanted = " ".join(kind.pin_sets[0])
    example = ", ".join(f'"{p}" = "{t}"' for p, t in zip(instance.pins, kind.pin_sets[0], strict=False))
    where = f"the row of {part.name}" if part is not None else "a part row"
    mapped.findings.append(
        Finding(
            "part/no-pin-map",
            "error",
            f"{instance.name} is a {kind.name} with package pins {pins}; which of them are {wanted} is not known: add "
            f"pins = {{ {example} }} (in the right order) to {where}",
            device=instance.name,
            file=instance.place.file,
            line=instance.place.line,
        )
    )
