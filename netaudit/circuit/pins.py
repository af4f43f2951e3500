"""Package pins of an export's instance to the terminals of a kind."""

from __future__ import annotations

import re

from netaudit.devices.base import Kind
from netaudit.parts.part import Part
from netaudit.syntax.export import Instance

#: terminals by the port names that leave no choice
_CALLED = {
    "ANODE": "A", "CATHODE": "K", "KATHODE": "K", "CATH": "K", "BASE": "B", "COLLECTOR": "C", "EMITTER": "E", "GATE": "G",
    "DRAIN": "D", "SOURCE": "S", "POS": "+", "NEG": "-", "PLUS": "+", "MINUS": "-",
}  # fmt: skip


def terminals(instance: Instance, kind: Kind, part: Part | None) -> dict[str, str | None] | str:
    """Terminals to nets, or what cannot be told: the package pins, or those that one terminal shares on several nets."""
    if not kind.pin_sets:
        return _any_pins(instance, part)
    named = {**{port: instance.pins[pin] for pin, port in instance.ports.items()}, **instance.pins}
    if part is not None and part.pins:
        return _mapped(named, kind, part)
    for pins in kind.pin_sets:
        if (set(named) <= set(pins) and _told(instance, kind)) or set(pins) <= set(named):
            return _filled(kind, {p: named.get(p) for p in pins})
    called = _by_name(instance, kind)
    if called is not None:
        return _filled(kind, called)
    if ("1", "2") in kind.pin_sets and len(instance.pins) <= 2:
        nets = [*(instance.pins[p] for p in sorted(instance.pins, key=natural)), None, None][:2]
        return dict(zip(("1", "2"), nets, strict=True))
    return f"package pins {', '.join(sorted(instance.pins, key=natural)) or 'that are not on any net'}"


def _told(instance: Instance, kind: Kind) -> bool:
    return bool(instance.pins) or ("1", "2") in kind.pin_sets


def _any_pins(instance: Instance, part: Part | None) -> dict[str, str | None]:
    """The pins of a kind that takes any, by the part's names for them where it has some."""
    names = part.pins if part is not None else {}
    out: dict[str, str | None] = {}
    for pin in sorted(instance.pins, key=natural):
        net = instance.pins[pin]
        name = names.get(pin, pin)
        out[name if out.get(name, net) == net else pin] = net
    return out


def _mapped(named: dict[str, str], kind: Kind, part: Part) -> dict[str, str | None] | str:
    out: dict[str, str | None] = {}
    for package, terminal in part.pins.items():
        net = named.get(package)
        if net is None:
            continue
        known = out.setdefault(terminal, net)
        if known != net:
            shared = ", ".join(p for p, t in part.pins.items() if t == terminal and p in named)
            return f"pins {shared} that are all {terminal} by the row of {part.name}, but on nets {known} and {net}"
    if not out and named:
        return f"package pins {', '.join(sorted(named, key=natural))}, none of which the row of {part.name} knows"
    return _filled(kind, out)


def _by_name(instance: Instance, kind: Kind) -> dict[str, str | None] | None:
    """Terminals by port names such as ANODE; C is a cathode where a kind has A and K alone."""
    out: dict[str, str | None] = {}
    every = {terminal for pins in kind.pin_sets for terminal in pins}
    for pin, net in instance.pins.items():
        port = instance.ports.get(pin, pin).upper()
        terminal = port if port in every else _CALLED.get(port, "K" if port == "C" and every == {"A", "K"} else "")
        if terminal not in every or out.setdefault(terminal, net) != net:
            return None
    return out or None


def _filled(kind: Kind, pins: dict[str, str | None]) -> dict[str, str | None]:
    """Terminals that the export leaves unconnected stay open."""
    every = kind.pins_for(list(pins))
    return {pin: pins.get(pin) for pin in every}


def natural(name: str) -> list[tuple[int, str]]:
    """R2 before R10."""
    return [(int(t), "") if t.isdecimal() else (-1, t) for t in re.split(r"(\d+)", name)]
