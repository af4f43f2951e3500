"""What an export states of one part: value, tolerance, state and ratings, each with the property it came from."""

from __future__ import annotations

import re
from dataclasses import dataclass

from netaudit.circuit.people import Written, read_people
from netaudit.devices.base import Kind
from netaudit.parts.part import Part
from netaudit.syntax.export import Instance, Property
from netaudit.syntax.export_settings import ExportSettings, Rule, folded
from netaudit.syntax.statements import Word

#: kinds whose value people write at the part
_VALUED = {"resistor", "trimmer", "thermistor", "capacitor", "inductor", "fuse", "regulator", "converter"}
_RATING_UNITS = {"P": "W", "V": "V", "I": "A"}
#: the rating that stands beside a value: 100n/50V, 10k 1/4W, 10uH 1.5A, 1A 250V
_BESIDE = {"capacitor": "V_R", "resistor": "P_tot", "inductor": "I_max", "fuse": "V_max"}


@dataclass(frozen=True)
class Value:
    """A value and tolerance; ``unread`` says in words what could not be read, ``lacking`` that the kind needs it."""

    value: Word | None = None
    tolerance: Word | None = None
    unread: str = ""
    lacking: bool = False


@dataclass(frozen=True)
class Stated:
    """One part of an export with all that says something of it."""

    instance: Instance
    kind: Kind
    part: Part | None
    rule: Rule | None
    settings: ExportSettings

    def texts(self, what: str) -> list[Property]:
        """Properties of a column that hold anything, in the order of the column's names."""
        names = {folded(n): k for k, n in reversed(list(enumerate(self.settings.columns[what])))}
        found = [p for p in self.instance.properties if p.text.strip() and folded(p.name) in names]
        return sorted(found, key=lambda p: names[folded(p.name)])

    def ratings(self) -> dict[str, tuple[Word, str]]:
        """Rating symbols to their word and the property it came from; a part's own row wins."""
        out: dict[str, tuple[Word, str]] = {}
        known = self.part.ratings if self.part is not None else {}
        if self.instance.properties:
            texts = {p.name.casefold(): p for p in reversed(self.instance.properties) if p.text.strip()}
            for symbol, names in self.settings.ratings.items():
                if symbol in self.kind.ratings and symbol not in known:
                    self._rating(symbol, [texts[n.casefold()] for n in names if n.casefold() in texts], False, out)
            beside = _BESIDE.get(self.kind.name, "")
            if beside and beside not in out and beside in self.kind.ratings and beside not in known:
                self._rating(beside, self.texts("value"), True, out)
        return out

    def _rating(self, symbol: str, properties: list[Property], stated: bool, out: dict[str, tuple[Word, str]]) -> None:
        for p in properties:
            written = _read(p, _RATING_UNITS[symbol[0]], stated)
            if written is not None and float(re.sub(r"[^\d.].*", "", written.value) or 0) > 0:
                out[symbol] = (Word(written.value, self.instance.place), p.name)
                return


def value_of(stated: Stated) -> Value:
    """The value of a part whose kind has one."""
    kind, place = stated.kind, stated.instance.place
    if kind.value is None or kind.name not in _VALUED:
        lacking = kind.value is not None and kind.value.required and not (kind.default_state or _in_row(stated))
        return Value(
            unread=f"a {kind.name} of an export has no value: set one by a rule" if lacking else "", lacking=lacking
        )
    if stated.rule is not None and stated.rule.value:
        return Value(Word(stated.rule.value, place))
    properties = stated.texts("value")
    for p in properties:
        written = _read(p, kind.value.units[0], False, kind.name == "fuse")
        if written is not None:
            tolerance = written.tolerance or _tolerance(stated)
            return Value(Word(written.value, place), Word(tolerance, place) if tolerance else None)
    if _in_row(stated):
        return Value()
    said = f"{properties[0].text.strip()!r} cannot be read" if properties else "no value"
    return Value(unread=said, lacking=kind.value.required)


def _in_row(stated: Stated) -> bool:
    return stated.part is not None and "value" in stated.part.parameters


def _read(p: Property, unit: str, beside: bool, fuse: bool = False) -> Written | None:
    """A property as people write it, or as the number that it is."""
    if (
        p.number is not None
        and not beside
        and p.unit in ("", unit)
        and (p.unit or not p.text.isdigit() or unit == "ohm")
    ):
        return Written(f"{p.number:.12g}{unit}") if p.number >= 0 else None
    text = re.sub(r"(?<![A-Za-z])(?:FF|TT|F|T|M)(?=[\d.,]+\s*m?A)", "", p.text) if fuse else p.text
    return read_people(text, unit, beside)


def _tolerance(stated: Stated) -> str:
    for p in stated.texts("tolerance"):
        match = re.search(r"(\d+(?:[.,]\d+)?)\s*%?\s*$", p.text.strip())
        if match and ("%" in p.text or p.number is not None):
            return f"{match[1].replace(',', '.')}%"
    return ""


def state_of(stated: Stated, valued: bool) -> Word | None:
    """The state of a kind that must have one: the rule's, else the one at rest."""
    kind = stated.kind
    if stated.rule is not None and stated.rule.state:
        return Word(stated.rule.state, stated.instance.place)
    if not kind.states or kind.value is not None or kind.default_state or valued:
        return None
    return Word("off" if "off" in kind.states else kind.states[0], stated.instance.place)
