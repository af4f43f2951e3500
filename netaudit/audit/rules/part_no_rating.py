"""A check that could not be made.

The part does not state the rating that a check compares with.  Nothing is guessed: the check is counted as missing.
Without one of these a part counts as not audited: P_tot (resistor, trimmer, zener, transistors), I_F and V_R or V_RRM
(diode, LED, bridge, optocoupler), V_RWM (suppressor), V_R (capacitor), I_C and V_CEO, I_D, V_DS and V_GS, I_max
(inductor, switch, relay, driver), V_I and I_O (regulator, converter).

Mend: the rating from the data sheet, in the part's row or on the device line.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V I_max=1A +:VIN -:GND
        R1 resistor 1k 1% 1:VIN 2:GND

    passes:
        PS1 supply 12V I_max=1A +:VIN -:GND
        R1 resistor 1k 1% P_tot=250mW V_max=200V 1:VIN 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from netaudit.audit.rule import Rule, Site, about
from netaudit.devices import KINDS
from netaudit.devices.base import Check, Device
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    from netaudit.audit.limits import Limit
    from netaudit.parts.policy import load_policy

    policy = load_policy("none")
    on_path = {name for graph in site.graphs for path in graph.circuit.heat_paths for name in path.devices}
    seen: set[str] = set()
    for device in (device for graph in site.graphs for device in graph.circuit.devices):
        if device.name in seen or device.missing:
            continue
        seen.add(device.name)
        heated = ("R_th_jc" if device.name in on_path else "R_th_ja") in device.ratings
        checks = KINDS[device.kind].checks(device)
        limits = [Limit(device, check, policy, heated, device.name in on_path) for check in checks]
        missing = [(limit.check, limit.missing) for limit in limits if limit.missing]
        if missing:
            yield rating_note(device, missing)


def rating_note(device: Device, missing: Sequence[tuple[Check, str]]) -> Finding:
    """One note a device: which checks were not made, and the symbol that each lacks."""
    said = ", ".join(f"{check.quantity.replace('-', ' ')} ({symbol})" for check, symbol in missing)
    needed = any(check.required for check, _ in missing)
    tail = ": it counts as not audited until that is stated" if needed else ""
    text = f"{device.name}: not checked for lack of a rating: {said}{tail}"
    return Finding(RULE.name, RULE.level, text, **about(device))


RULE = Rule("part/no-rating", "note", "structure", "a check that could not be made", find, whole=True)
