"""Writes EDIF 2 0 0 as capture tools do, with their habits as options; nothing in here reads it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

Pins = Mapping[str, str]


def text(name: str) -> str:
    """A string token: what a string may not hold stands as a decimal code."""
    inside = "".join(c if 32 <= ord(c) < 127 and c not in '"%' else f"%{ord(c)}%" for c in name)
    return f'"{inside}"'


@dataclass(frozen=True)
class Placed:
    """An instance: its name, its symbol, properties, and its pins by their nets."""

    name: str
    symbol: str
    pins: Pins
    properties: Mapping[str, str] = field(default_factory=dict)


@dataclass(frozen=True)
class Habits:
    """``designator``: name, form, property; ``pins``: name, port, instance (where the package pin number stands)."""

    designator: str = "name"
    pins: str = "name"
    upper: bool = False
    pages: int = 1


def ports_of(placed: Sequence[Placed]) -> dict[str, list[str]]:
    """Pins of each symbol, in the order of their first use."""
    found: dict[str, dict[str, None]] = {}
    for part in placed:
        found.setdefault(part.symbol, {}).update(dict.fromkeys(part.pins))
    return {symbol: list(pins) for symbol, pins in found.items()}


def edif(placed: Sequence[Placed], habits: Habits = Habits()) -> str:
    """The whole file.  Identifiers are numbers; every name that people see is a rename."""
    ports = ports_of(placed)
    cells = [_cell(number, symbol, pins, habits) for number, (symbol, pins) in enumerate(ports.items())]
    symbols = {symbol: number for number, symbol in enumerate(ports)}
    out = [
        "(edif board (edifVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0))",
        ' (status (written (timeStamp 2026 3 1 9 30 0) (author "greenhouse")))',
        " (library lib (edifLevel 0) (technology (numberDefinition))",
        *cells,
        "  (cell top (cellType GENERIC) (view v (viewType SCHEMATIC) (interface) (contents",
    ]
    size = -(-len(placed) // habits.pages)
    for page in range(habits.pages):
        part = range(page * size, min((page + 1) * size, len(placed)))
        if habits.pages > 1:
            out.append(f"   (page p{page}")
        out += [_instance(k, placed[k], symbols, ports, habits) for k in part]
        out += _nets(placed, part, page, ports, "&" if habits.pins == "name" else "p")
        if habits.pages > 1:
            out.append("   )")
    out.append("  ))))\n (design board (cellRef top (libraryRef lib))))\n")
    whole = "\n".join(out)
    return whole.replace("(instance ", "(INSTANCE ").replace("(net ", "(Net ") if habits.upper else whole


def _cell(number: int, symbol: str, pins: Sequence[str], habits: Habits) -> str:
    ports = []
    for k, pin in enumerate(pins):
        if habits.pins == "name":
            ports.append(f"(port (rename &{k} {text(pin)}) (direction INOUT))")
        elif habits.pins == "port":
            ports.append(f"(port p{k} (designator {text(pin)}))")
        else:
            ports.append(f"(port p{k})")
    return f"  (cell (rename s{number} {text(symbol)}) (cellType GENERIC) (view n (viewType NETLIST) (interface {' '.join(ports)})))"


def _instance(
    k: int, part: Placed, symbols: Mapping[str, int], ports: Mapping[str, Sequence[str]], habits: Habits
) -> str:
    more = [
        f"(property (rename q{n} {text(name)}) (string {text(v)}))"
        for n, (name, v) in enumerate(part.properties.items())
    ]
    if habits.pins == "instance":
        more += [f"(portInstance (portRef p{n}) (designator {text(pin)}))" for n, pin in enumerate(ports[part.symbol])]
    name = f"&{k}"
    if habits.designator == "name":
        name = f"(rename &{k} {text(part.name)})"
    elif habits.designator == "form":
        more.append(f"(designator (stringDisplay {text(part.name)}))")
    else:
        more.append(f"(property RefDes (string {text(part.name)}))")
    return f"   (instance {name} (viewRef n (cellRef s{symbols[part.symbol]})) {' '.join(more)})"


def _nets(placed: Sequence[Placed], part: range, page: int, ports: Mapping[str, Sequence[str]], mark: str) -> list[str]:
    nets: dict[str, list[str]] = {}
    for k in part:
        for pin, net in placed[k].pins.items():
            nets.setdefault(net, []).append(f"(portRef {mark}{ports[placed[k].symbol].index(pin)} (instanceRef &{k}))")
    return [
        f"   (net (rename n{page}_{n} {text(net)}) (joined {' '.join(pins)}))"
        for n, (net, pins) in enumerate(nets.items())
    ]
