"""The pages that ``explain`` prints: rules from their docstrings, kinds from their tables."""

from __future__ import annotations

import inspect
import sys

from netaudit.audit.rules import PAGES, RULES
from netaudit.devices import KINDS
from netaudit.devices.base import Key, Kind
from netaudit.failure import InputError
from netaudit.parts.names import PARAMETERS, RATINGS
from netaudit.syntax.suggest import closest


def page(name: str | None) -> str:
    """The page of a rule or a kind, the index without a name.  Raises InputError when there is no such thing."""
    found = index_page() if name is None else rule_page(name) or kind_page(name)
    if found is None:
        near = closest(name or "", [*RULES, *KINDS])
        mend = f"did you mean {near}?" if near else "netaudit explain lists them"
        raise InputError(f"there is no rule or kind {name}", mend=mend)
    return found


def rule_page(name: str) -> str | None:
    rule = RULES.get(name)
    if rule is None:
        return None
    return f"{rule.name}  ({rule.level})\n\n{inspect.cleandoc(PAGES[name])}\n"


def kind_page(name: str) -> str | None:
    kind = KINDS.get(name)
    if kind is None:
        return None
    lines = [f"{kind.name}", "", inspect.cleandoc(sys.modules[type(kind).__module__].__doc__ or ""), ""]
    pins = " or ".join(" ".join(pins) for pins in kind.pin_sets) or "any"
    lines.append(f"pins     {pins}")
    if kind.value is not None:
        needed = "" if kind.value.required else ", may be left out"
        lines.append(f"value    in {' or '.join(kind.value.units)}{needed}")
    if kind.states:
        lines.append(f"state    {' or '.join(kind.states)}")
    if kind.keys:
        lines += ["", "keys"] + [f"  {_key(key, spec)}" for key, spec in kind.keys.items()]
    if kind.ratings:
        lines += ["", "ratings"] + [
            f"  {s:<10} {RATINGS[s].unit:<5} {RATINGS[s].text}" for s in kind.ratings if s in RATINGS
        ]
    return "\n".join(lines) + "\n"


def _key(key: str, spec: Key) -> str:
    known = PARAMETERS.get(key)
    unit = spec.unit or ""
    words = f"{' | '.join(spec.words)} " if spec.words else ""
    condition = f" @ {spec.at}" if spec.at else ""
    return f"{key:<10} {words}{unit}{condition}  {known.text if known is not None else ''}".rstrip()


def index_page() -> str:
    lines = ["rules", ""]
    lines += [f"  {rule.name:<34} {rule.level:<8} {rule.summary}" for rule in RULES.values()]
    lines += ["", "kinds", ""]
    lines += [f"  {kind.name:<16} {_pins(kind)}" for kind in KINDS.values()]
    return "\n".join(lines) + "\n"


def _pins(kind: Kind) -> str:
    return " or ".join(" ".join(pins) for pins in kind.pin_sets) or "any pins"
