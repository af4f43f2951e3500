"""Instances of one designator: units of one package come together, two parts of one designator stay apart."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace

from netaudit.finding import Finding
from netaudit.syntax.export import Export, Instance
from netaudit.syntax.export_settings import folded

_UNIT = re.compile(r"^(?P<base>.*?[A-Za-z]+\d+)(?:[A-Za-z]|[-.:_](?:[A-Za-z]|\d{1,2}))$")


@dataclass
class Gathered:
    """Parts in the order of the export, the designators that were drawn in several units, and clashes."""

    parts: list[Instance] = field(default_factory=list)
    units: dict[str, int] = field(default_factory=dict)
    findings: list[Finding] = field(default_factory=list)


def gathered(instances: Sequence[Instance]) -> Gathered:
    """Parts drawn as several units come together: the same designator, or one designator with a unit letter."""
    out = Gathered()
    bases = _bases(instances)
    groups: dict[str, list[Instance]] = {}
    for instance in instances:
        groups.setdefault(bases.get(id(instance), instance.name), []).append(instance)
    for name, group in groups.items():
        whole = replace(group[0], name=name) if group[0].name != name else group[0]
        apart = 1
        for unit in group[1:]:
            if _agree(whole, unit) and not _same_pins(whole, unit):
                whole = _together(whole, unit)
                out.units[name] = out.units.get(name, 1) + 1
            else:
                apart += 1
                twin = _free(f"{name}~{apart}", groups)
                out.findings.append(_clash(name, twin, group[0], unit))
                out.parts.append(replace(unit, name=twin))
        out.parts.append(whole)
    if len(out.parts) != len(groups) or out.units:
        order = {id(i): k for k, i in enumerate(instances)}
        places = {p.name: order.get(id(groups[p.name][0]), 0) if p.name in groups else len(order) for p in out.parts}
        out.parts.sort(key=lambda p: places[p.name])
    return out


def _free(name: str, taken: Iterable[str]) -> str:
    while name in taken:
        name += "~"
    return name


def _bases(instances: Sequence[Instance]) -> dict[int, str]:
    """The designator of the package for each instance that is a unit of one."""
    letters: dict[str, list[Instance]] = {}
    for instance in instances:
        match = _UNIT.match(instance.name)
        if match is not None:
            letters.setdefault(match["base"], []).append(instance)
    names = {i.name for i in instances}
    return {
        id(i): base
        for base, group in letters.items()
        if len(group) > 1 and base not in names and _one_package(group)
        for i in group
    }


def _one_package(group: Sequence[Instance]) -> bool:
    """Units share a symbol or a part, no pin of theirs is on two nets, and each brings a pin of its own: two resistors
    R1A and R1B that both have pins 1 and 2 are two parts."""
    if len({i.cell for i in group}) > 1 and len({_part(i) for i in group} - {""}) != 1:
        return False
    nets: dict[str, str] = {}
    own: set[str] = set()
    for instance in group:
        if not set(instance.pins) - own:
            return False
        own |= set(instance.pins)
        if any(nets.setdefault(pin, net) != net for pin, net in instance.pins.items()):
            return False
    return True


def _part(instance: Instance) -> str:
    wanted = ("partnumber", "mpn", "part", "device", "value", "comment")
    return next(
        (p.text.strip() for w in wanted for p in instance.properties if folded(p.name) == w and p.text.strip()), ""
    )


def _agree(a: Instance, b: Instance) -> bool:
    return all(a.pins.get(pin, net) == net for pin, net in b.pins.items())


def _same_pins(a: Instance, b: Instance) -> bool:
    """Whether a second instance brings nothing but another value: two parts in parallel, not units of one."""
    return bool(b.pins) and set(b.pins) <= set(a.pins) and _part(a) != _part(b)


def _together(known: Instance, unit: Instance) -> Instance:
    stated = {p.name.casefold() for p in known.properties if p.text.strip()}
    more = tuple(p for p in unit.properties if p.name.casefold() not in stated)
    return replace(
        known,
        pins={**known.pins, **unit.pins},
        ports={**known.ports, **unit.ports},
        properties=(*known.properties, *more),
    )


def _clash(name: str, twin: str, first: Instance, second: Instance) -> Finding:
    return Finding(
        "graph/clashing-names",
        "error",
        f"two parts are called {name} (lines {first.place.line} and {second.place.line}) and share pins that are on "
        f"different nets: the second is called {twin} here; give it a designator of its own",
        device=name,
        file=second.place.file,
        line=second.place.line,
    )


def clashing_names(export: Export, parts: Sequence[Instance]) -> Iterable[Finding]:
    """Nets of one name, and names that differ only in letter case."""
    for first, second, line in export.clashes:
        same = first.casefold() != second.casefold()
        said = (
            f"a second net is called {first}, here {second}"
            if same
            else f"nets {first} and {second} differ only in letter case"
        )
        yield Finding(
            "graph/clashing-names",
            "warning",
            f"{said}: they are kept apart; if they are one net, draw it as one",
            net=first,
            file=export.file,
            line=line,
        )
    seen: dict[str, Instance] = {}
    for part in parts:
        first_part = seen.setdefault(part.name.casefold(), part)
        if first_part is not part:
            yield Finding(
                "graph/clashing-names",
                "warning",
                f"designators {first_part.name} and {part.name} differ only in letter case: rename one of them",
                device=part.name,
                file=part.place.file,
                line=part.place.line,
            )
