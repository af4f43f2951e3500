"""Values held at nominal.

A value that decides a stress (a resistance, V_F, V_Z, h_FE, V_GS(th), CTR) has no tolerance and is held at its nominal
in the worst case, which is then not the worst.  One note a board, with the list.

Mend: a tolerance on the device line (``1%``), or a ``spread`` in the part's row.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k P_tot=250mW 1:VIN 2:GND

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1% P_tot=250mW 1:VIN 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, listed
from netaudit.devices.base import Device
from netaudit.finding import Finding

#: values that decide a stress, by kind: held at nominal they are worth a remark
_DECIDING = {
    "resistor": ("value",),
    "trimmer": ("value",),
    "thermistor": ("value",),
    "diode": ("V_F",),
    "led": ("V_F",),
    "bridge": ("V_F",),
    "zener": ("V_Z",),
    "suppressor": ("V_Z",),
    "npn": ("h_FE", "beta_F"),
    "pnp": ("h_FE", "beta_F"),
    "nmos": ("V_th", "V_GS_th"),
    "pmos": ("V_th", "V_GS_th"),
    "optocoupler": ("CTR",),
}


def find(site: Site) -> Iterable[Finding]:
    fitted = {device.name: device for graph in reversed(site.graphs) for device in graph.circuit.devices}
    yield from spread_note(site.board.name, without_spread(fitted.values()))


def without_spread(devices: Iterable[Device]) -> list[str]:
    """Designators whose deciding value has no tolerance."""
    names = []
    for device in devices:
        deciding = _DECIDING.get(device.kind, ())
        if device.missing or device.points or not deciding:
            continue
        if not any(name in device.values and device.values[name].varies for name in deciding):
            names.append(device.name)
    return names


def spread_note(board: str, names: list[str]) -> Iterable[Finding]:
    """One note a board, none when nothing lacks a spread."""
    if names:
        text = f"held at nominal for lack of a tolerance: {listed(names, 12)}"
        yield Finding(RULE.name, RULE.level, text, file=board, line=1, value=float(len(names)), unit="1")


RULE = Rule("part/no-spread", "note", "structure", "values held at nominal", find, whole=True)
