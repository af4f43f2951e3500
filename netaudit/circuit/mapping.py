"""From an export's instances to devices: by the part table, by the project's rules, then by the designator's letters.

Order: part number, then value, looked up in the part table; then the rules of ``[export]``; then designator letters
(IEC 81346-2, IEEE 315 and common practice).  Package pins become terminals by the part's ``pins``; two-pin parts without
polarity need none; a polarised part without a pin map is the finding ``part/no-pin-map``.  What stays unknown becomes
``unmodelled``, by name; symbols that are no parts are left out, by name too.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property

from netaudit.circuit.export_summary import ExportSummary
from netaudit.circuit.gather import clashing_names, gathered
from netaudit.circuit.people import read_people
from netaudit.circuit.pins import natural, terminals
from netaudit.circuit.raw import RawDevice, Spec
from netaudit.circuit.stated import Stated, state_of, value_of
from netaudit.devices import KINDS
from netaudit.devices.base import Kind
from netaudit.finding import Finding
from netaudit.parts.part import Part
from netaudit.parts.tables import PartTable
from netaudit.syntax.export import Export, Instance
from netaudit.syntax.export_settings import DEFAULTS, ExportSettings, Rule, folded
from netaudit.syntax.statements import Word

#: words in a value, part or symbol that tell what a diode or transistor is, for its designator's letters
_WORDS = {
    "diode": (("LED", "led"), ("ZENER", "zener"), ("TVS", "suppressor")),
    "Q": (("NPN", "npn"), ("PNP", "pnp"), ("NMOS", "nmos"), ("PMOS", "pmos")),
}
_LETTERS = re.compile(r"^(?:.*/)?([^\W\d_]+)")
_SYMBOL = re.compile(r"off.?page|^(?:gnd|ground|earth|power|pwr|vcc|vdd|vss|vee)(?![a-z])", re.IGNORECASE)
_YES = frozenset({"1", "yes", "y", "true", "x", "t"})
_NO = frozenset({"0", "no", "n", "false", "f"})


@dataclass
class Mapped:
    """What mapping gave: devices, packages of several devices, what is not fitted, findings, and a summary by name."""

    devices: list[RawDevice]
    packages: list[tuple[Instance, Part]]
    omitted: list[str]
    findings: list[Finding]
    remarks: list[str]
    summary: ExportSummary
    #: by designator, the row that would be found for it, and what the export says of it
    known: dict[str, tuple[str, str]]


def map_export(export: Export, table: PartTable, settings: ExportSettings = DEFAULTS) -> Mapped:
    """Devices of an export; nothing is dropped silently."""
    return Mapper(export, table, settings).mapped()


@dataclass
class Mapper:
    """Goes through the parts of one export."""

    export: Export
    table: PartTable
    settings: ExportSettings
    kinds: dict[tuple[str, str], list[str]] = field(default_factory=dict)
    unread: dict[str, str] = field(default_factory=dict)
    resting: dict[str, list[str]] = field(default_factory=dict)
    ratings: dict[tuple[str, str], list[str]] = field(default_factory=dict)
    findings: list[Finding] = field(default_factory=list)

    def mapped(self) -> Mapped:
        together = gathered(self.export.instances)
        self.findings += [*together.findings, *clashing_names(self.export, together.parts)]
        devices: list[RawDevice] = []
        packages: list[tuple[Instance, Part]] = []
        omitted: list[str] = []
        symbols: list[str] = []
        known: dict[str, tuple[str, str]] = {}
        for instance in together.parts:
            rule = next((r for r in self.settings.rules if self._fits(r, instance)), None)
            part = self.find_part(instance, rule)
            if part is None and rule is None and self._is_symbol(instance):
                symbols.append(instance.name)
                continue
            if self._left_out(instance, rule):
                omitted.append(instance.name)
            if part is not None and part.block is not None:
                packages.append((instance, part))
                self.kinds.setdefault((f"package ({part.block})", "part table"), []).append(instance.name)
                continue
            device, why = self._device(instance, part, rule, instance.name in omitted)
            devices.append(device)
            known[device.name] = self._known(instance, device.kind)
            self.kinds.setdefault((device.kind.name, why), []).append(device.name)
        remarks = [f"{self.export.file}: {r}" for r in self.export.remarks]
        remarks += [
            f"{self.export.file}: {', '.join(names[:12])}{f' and {len(names) - 12} more' if len(names) > 12 else ''} "
            f"taken as {state}: an export knows no positions; change it with set"
            for state, names in self.resting.items()
        ]
        left_out = {*omitted, *symbols}
        alone = [i.name for i in together.parts if not i.pins and i.name not in left_out]
        summary = self._summary(omitted, symbols, together.units, alone)
        return Mapped(devices, packages, omitted, self.findings, remarks, summary, known)

    def _summary(
        self, omitted: list[str], symbols: list[str], units: Mapping[str, int], alone: list[str]
    ) -> ExportSummary:
        kinds = sorted(self.kinds.items(), key=lambda item: (-len(item[1]), item[0]))
        return ExportSummary(
            self.export.file,
            len(self.export.instances),
            len(self.export.nets),
            tuple((kind, why, tuple(names)) for (kind, why), names in kinds),
            tuple(omitted),
            tuple(self.unread.items()),
            tuple(symbols),
            tuple(units.items()),
            tuple((symbol, name, tuple(parts)) for (symbol, name), parts in self.ratings.items()),
            tuple(alone),
        )

    def _known(self, instance: Instance, kind: Kind) -> tuple[str, str]:
        """The name of the row that would be found: the part number, the value where it is no number, else the symbol."""
        stated = [p for p in instance.properties if p.text.strip()]
        said = ", ".join(f"{p.name} {p.text.strip()}" for p in stated[:6])
        unit = kind.value.units[0] if kind.value is not None else "ohm"
        texts = [*self._texts(instance, "part"), *self._texts(instance, "value")]
        name = next((t for t in texts if t and read_people(t, unit) is None and read_people(t, "F") is None), "")
        return name or instance.cell, said

    def _fits(self, rule: Rule, instance: Instance) -> bool:
        return all(any(test.match(text) for text in self._texts(instance, what)) for what, test in rule.tests)

    def _texts(self, instance: Instance, what: str) -> list[str]:
        """What a pattern of a rule looks at: a designator, cell, value or part number, else the property of that name."""
        if what == "designator":
            return [instance.name, instance.designator]
        if what == "cell":
            return [instance.cell]
        names = self.settings.called(what) if what in ("value", "part") else {folded(what)}
        return [p.text.strip() for p in instance.properties if folded(p.name) in names]

    def _is_symbol(self, instance: Instance) -> bool:
        """A drawing symbol, no part: ``#`` before its name, or a single pin on the net that it is called after."""
        if instance.designator.startswith("#"):
            return True
        if len(instance.pins) > 1 or self._by_letters(instance) != "unmodelled":
            return False
        if not instance.pins:
            return not instance.properties and bool(_SYMBOL.search(instance.cell))
        net = next(iter(instance.pins.values())).rsplit("/", 1)[-1].casefold()
        values = self._texts(instance, "value")
        called = {t.casefold() for t in (instance.cell, *values, *instance.ports.values(), *instance.pins)}
        return net in called or bool(_SYMBOL.search(instance.cell))

    def _left_out(self, instance: Instance, rule: Rule | None) -> bool:
        """Not fitted, by a rule, a property that says so, or a mark in a text."""
        if rule is not None and rule.fitted is not None:
            return not rule.fitted
        for p in instance.properties:
            text, name = p.text.strip(), folded(p.name)
            if not text:
                continue
            if name in self.settings.called("not-fitted") and (text.casefold() in _YES or folded(text) == name):
                return True
            if name in self.settings.called("fitted") and text.casefold() in _NO:
                return True
            shown = name in self.settings.called("value") or name in self.settings.called("part")
            if self.settings.marked(text, whole=not shown):
                return True
        return False

    def _by_letters(self, instance: Instance) -> str:
        found = [m[1].upper() for m in map(_LETTERS.match, (instance.designator, instance.symbol)) if m is not None]
        letters = next((f for f in found if f in self.settings.letters), found[0] if found else "")
        kind = self.settings.letters.get(letters, "")
        options = _WORDS.get(kind or letters, ())
        if options:
            said = " ".join(
                (instance.cell, *self._texts(instance, "value"), *self._texts(instance, "description"))
            ).upper()
            for word, better in options:
                if re.search(rf"(?<![A-Z]){word}(?![A-Z])", said):
                    return better
        return kind or "unmodelled"

    def _device(self, instance: Instance, part: Part | None, rule: Rule | None, omitted: bool) -> tuple[RawDevice, str]:
        kind, why = self._kind(instance, part, rule)
        stated = Stated(instance, kind, part, rule, self.settings)
        found = value_of(stated)
        if found.unread and not omitted:
            self.unread[instance.name] = found.unread
        if found.lacking:
            return self._unknown(instance, part), "value not read"
        state = state_of(stated, found.value is not None)
        if state is not None and (rule is None or not rule.state):
            self.resting.setdefault(state.text, []).append(instance.name)
        pins = terminals(instance, kind, part)
        if isinstance(pins, str):
            if not omitted:
                self._no_pin_map(instance, kind, part, pins)
            return self._unknown(instance, None), "no pin map"
        keys: dict[str, Word] = {}
        if part is not None:
            keys["part"] = Word(part.name, instance.place)
        for symbol, (word, name) in stated.ratings().items():
            keys[symbol] = word
            self.ratings.setdefault((symbol, name), []).append(instance.name)
        spec = Spec(found.value, None, found.tolerance, state, keys)
        return RawDevice(instance.name, kind, spec, pins, instance.place, _aliases(instance, pins)), why

    def _kind(self, instance: Instance, part: Part | None, rule: Rule | None) -> tuple[Kind, str]:
        if part is not None and part.kind in KINDS:
            ruled = rule is not None and rule.part == part.name
            return KINDS[part.kind or ""], "mapping rule" if ruled else "part table"
        if rule is not None and rule.kind:
            return KINDS[rule.kind], "mapping rule"
        name = self._by_letters(instance)
        return KINDS[name], "designator letter" if name != "unmodelled" else "nothing known"

    def _unknown(self, instance: Instance, part: Part | None) -> RawDevice:
        kind = KINDS["unmodelled"]
        pins = terminals_of(instance, part)
        return RawDevice(instance.name, kind, Spec(), pins, instance.place, _aliases(instance, pins))

    @cached_property
    def _rows(self) -> dict[str, str]:
        """Names of rows without letter case, where that is no other row's."""
        rows: dict[str, str] = {}
        for name in self.table.rows:
            rows[name.casefold()] = "" if name.casefold() in rows else name
        return rows

    def find_part(self, instance: Instance, rule: Rule | None = None) -> Part | None:
        """The table row that the export names: part number, then value, then the cell's name; then the rule's."""
        for what in ("part", "value"):
            # names in the order of the settings, not in that of the drawing
            texts = {folded(p.name): p.text.strip() for p in reversed(instance.properties) if p.text.strip()}
            for name in self.settings.columns[what]:
                part = self._row(texts.get(folded(name), ""))
                if part is not None:
                    return part
        return self._row(instance.cell) or self._row(rule.part if rule is not None else "")

    def _row(self, text: str) -> Part | None:
        if not text or not self.table.rows:
            return None
        return self.table.get(text) or self.table.get(self._rows.get(text.casefold(), ""))

    def _no_pin_map(self, instance: Instance, kind: Kind, part: Part | None, pins: str) -> None:
        wanted = " ".join(kind.pin_sets[0])
        order = sorted(instance.pins, key=natural)
        example = ", ".join(f'"{p}" = "{t}"' for p, t in zip(order, kind.pin_sets[0], strict=False))
        texts = [*self._texts(instance, "part"), *self._texts(instance, "value"), instance.cell]
        called = next((t for t in texts if t), instance.name)
        where = f"the row of {part.name}" if part is not None else f'a part row for {called!r}, kind = "{kind.name}"'
        self.findings.append(
            Finding(
                "part/no-pin-map",
                "error",
                f"{instance.name} is a {kind.name} with {pins}; which of them are {wanted} is not known: add "
                f"pins = {{ {example} }} (in the right order) to {where}",
                device=instance.name,
                file=instance.place.file,
                line=instance.place.line,
            )
        )


def terminals_of(instance: Instance, part: Part | None) -> dict[str, str | None]:
    found = terminals(instance, KINDS["unmodelled"], part)
    assert not isinstance(found, str)  # a kind with any pins takes them all
    return found


def _aliases(instance: Instance, pins: Mapping[str, str | None]) -> dict[str, str]:
    """Port names by which a pin may be called as well, those of several pins by the first."""
    out: dict[str, str] = {}
    for pin, port in instance.ports.items():
        if port not in pins and pin in pins:
            out.setdefault(port, pin)
    return out
