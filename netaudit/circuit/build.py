"""A raw device to a resolved one: quantities by the kind's units, the part's model and ratings, its own law's defaults."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path

from netaudit.circuit.raw import RawDevice
from netaudit.devices.base import Device, Key, ValueSpec
from netaudit.failure import InputError
from netaudit.finding import Finding
from netaudit.parts.names import PARAMETERS
from netaudit.parts.part import Part, Rating
from netaudit.parts.ratings import inline_rating
from netaudit.parts.tables import PartTable
from netaudit.parts.values import physical
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity
from netaudit.quantities.read import combine, read_at, read_quantity
from netaudit.syntax.paths import below_root
from netaudit.syntax.statements import Word
from netaudit.syntax.suggest import closest

_CODED = frozenset({"ohm", "F", "H"})


@dataclass
class Builder:
    """Builds devices against a part table; collects findings (unknown part, part of another kind) and files read."""

    table: PartTable
    root: str
    findings: dict[tuple[str, str], Finding] = field(default_factory=dict)
    files: dict[str, str] = field(default_factory=dict)

    def build(self, raw: RawDevice) -> Device:
        """The device of one mode.  Raises InputError for values and keys that cannot be."""
        part = self._part(raw)
        values: dict[str, Quantity] = dict(part.parameters) if part is not None else {}
        words: dict[str, str] = dict(part.words) if part is not None else {}
        ratings: dict[str, Rating] = dict(part.ratings) if part is not None else {}
        points = part.points if part is not None else ()
        self._value(raw, values, words)
        for key, word in raw.spec.keys.items():
            if key == "part":
                continue
            if key == "points" and key in raw.kind.keys:
                points = self._points(raw, word)
            elif key in raw.kind.keys:
                self._key(raw, key, word, values, words)
            elif key in raw.kind.ratings:
                ratings[key] = inline_rating(key, word.text, word.place)
                if key in PARAMETERS:
                    values.pop(key, None)
            else:
                raise self._unknown(raw, key, word)
        pins = {pin: net if net is not None else f"nc({raw.name}:{pin})" for pin, net in raw.pins.items()}
        device = Device(
            raw.name, raw.kind.name, pins, values, words, ratings, raw.place, part, points,
            rough=part.rough if part is not None else "",
            open_pins=frozenset(pin for pin, net in raw.pins.items() if net is None),
        )  # fmt: skip
        return _resolved(raw, device)

    def _part(self, raw: RawDevice) -> Part | None:
        word = raw.spec.keys.get("part")
        if word is None:
            return None
        part = self.table.get(word.text)
        if part is None:
            self._unknown_part(raw, word)
            return None
        if part.kind is not None and part.kind != raw.kind.name:
            self.findings[("part/kind", raw.name)] = Finding(
                "part/kind",
                "error",
                f"{raw.name} is a {raw.kind.name}, but part {part.name} is a {part.kind} ({part.place.file}:"
                f"{part.place.line}): choose another part or correct the kind",
                device=raw.name,
                file=raw.place.file,
                line=raw.place.line,
            )
            return None
        return part

    def _unknown_part(self, raw: RawDevice, word: Word) -> None:
        near = closest(word.text, list(self.table.rows))
        mend = f"did you mean {near}?" if near else "add a row for it to a part table"
        self.findings[("part/unknown", raw.name)] = Finding(
            "part/unknown",
            "error",
            f"{raw.name}: part {word.text} stands in no table: {mend}",
            device=raw.name,
            file=raw.place.file,
            line=raw.place.line,
        )

    def _value(self, raw: RawDevice, values: dict[str, Quantity], words: dict[str, str]) -> None:
        spec, kind = raw.spec, raw.kind
        state = spec.state.text if spec.state is not None else kind.default_state
        if state:
            words["state"] = state
        written = spec.value or spec.span
        if kind.value is None:
            if kind.states and not state:
                raise InputError(
                    f"{raw.name}: a {kind.name} needs its state", place=raw.place, mend=f"{' or '.join(kind.states)}"
                )
            return
        if written is None:
            if spec.tolerance is not None:
                raise InputError(f"{raw.name}: a tolerance without a value", place=spec.tolerance.place)
            if kind.value.required and not state and "value" not in values:
                raise InputError(
                    f"{raw.name}: a {kind.name} needs its value",
                    place=raw.place,
                    mend=f"in {' or '.join(kind.value.units)}",
                )
            return
        coded = bool(_CODED & set(kind.value.units))
        quantity = combine(spec.value, spec.span, spec.tolerance, kind.value.units, raw.place, code=coded)
        _physical(raw.name, "its value", quantity, kind.value, written.place)
        values["value"] = quantity

    def _key(self, raw: RawDevice, key: str, word: Word, values: dict[str, Quantity], words: dict[str, str]) -> None:
        spec = raw.kind.keys[key]
        if word.text in spec.words or not spec.unit:
            if spec.words and word.text not in spec.words:
                raise InputError(
                    f"{raw.name}: {key}={word.text}", place=word.place, mend=f"{key} is {' or '.join(spec.words)}"
                )
            words[key] = word.text
            return
        unit = "V/K" if key == "alpha_VZ" and "V/K" in word.text else spec.unit
        if spec.at and "@" in word.text:
            quantity, condition = read_at(word.text, unit, spec.at, word.place)
            if condition is not None:
                values[f"{key}.at"] = condition
        else:
            values.pop(f"{key}.at", None)
            quantity = read_quantity(word.text, unit, word.place, code=unit in _CODED)
        _physical(raw.name, key, quantity, spec, word.place)
        wrong = physical(PARAMETERS[key], quantity) if key in PARAMETERS else ""
        if wrong:
            raise InputError(f"{raw.name}: {key} {wrong}", place=word.place, mend=f"it is the {PARAMETERS[key].text}")
        values[key] = quantity

    def _unknown(self, raw: RawDevice, key: str, word: Word) -> InputError:
        options = ["part", *raw.kind.keys, *raw.kind.ratings]
        near = closest(key, options)
        mend = f"did you mean {near}?" if near else f"a {raw.kind.name} takes {', '.join(sorted(options))}"
        return InputError(f"{raw.name}: a {raw.kind.name} has no key {key}", place=word.place, mend=mend)

    def _points(self, raw: RawDevice, word: Word) -> tuple[tuple[float, float], ...]:
        from netaudit.parts.measured import read_curves

        path = below_root(word.text, word.place, self.root)
        try:
            data = Path(path).read_bytes()
        except OSError as error:
            raise InputError(
                f"{raw.name}: the curve {word.text} cannot be read: {error.strerror}", place=word.place
            ) from None
        import hashlib

        self.files[path] = hashlib.sha256(data).hexdigest()
        curve = read_curves(data, word.text)[0]
        return tuple(sorted(zip(curve.v.tolist(), curve.i.tolist(), strict=True)))


def _physical(name: str, what: str, quantity: Quantity, spec: Key | ValueSpec, place: Place) -> None:
    least = spec.least
    if quantity.low < least:
        raise InputError(f"{name}: {what} cannot be below {least:g}", place=place)
    if spec.positive and quantity.low <= 0:
        raise InputError(f"{name}: {what} must be above zero", place=place)
    if isinstance(spec, Key) and quantity.high > spec.most:
        raise InputError(f"{name}: {what} cannot be above {spec.most:g}", place=place)


def _resolved(raw: RawDevice, device: Device) -> Device:
    """The kind's own completion; a part table's row that contradicts itself is named with its own place."""
    return raw.kind.resolve(device)


def covered(device: Device, reason: str, draws: Mapping[tuple[str, str], Quantity]) -> Device:
    """The device as one that is knowingly without a model and draws the given currents (pin to pin)."""
    values = {**device.values, **{f"{a}:{b}": q for (a, b), q in draws.items()}}
    kind = "unmodelled" if device.missing or device.kind == "unmodelled" else device.kind
    return replace(
        device,
        kind=kind,
        values=values,
        draws=tuple((a, b, q) for (a, b), q in draws.items()),
        covered=reason,
        missing="",
    )
