"""``shunt-reference``: K A REF; draws cathode current so that v_REF - v_A = V_ref + r_K i_K.

i_K >= 0; where REF stands above V_ref without feedback the part pulls its cathode down to 0.75 V_ref and no further.
Left out: reference input current, drift of V_ref with temperature and cathode voltage, the reverse diode.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Key, Kind, Values, View, conductance
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.families import RAMP
from netaudit.devices.junction import LEAK
from netaudit.quantities.quantity import exact

#: voltage that the cathode keeps when fully on, as a share of V_ref (common practice for parts of 1.2 V to 2.5 V)
_SATURATED = 0.75


@dataclass(frozen=True)
class ShuntReference(Kind):
    def resolve(self, device: Device) -> Device:
        if "V_ref" not in device.values:
            return replace(device, missing="it has no model: no V_ref")
        return replace(device, values={"r_K": exact(0.0, "ohm"), **device.values})

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        k, n, r = a.pin("K"), a.pin("A"), a.pin("REF")
        j, y = a.unknown("j"), a.unknown("y")
        v_ref, r_k = np.asarray(values["V_ref"]), np.asarray(values["r_K"])
        a.add(k, j, 1.0)
        a.add(n, j, -1.0)
        conductance(a, k, n, LEAK)
        # y = min(v_REF - v_A - V_ref - r_K j, v_K - v_A - saturated)
        a.add(y, y, 1.0)
        a.add(y, r, -1.0)
        a.add(y, n, 1.0)
        a.add(y, j, r_k)
        a.source(y, -v_ref)
        a.branch(RAMP, [(y, 1.0)], [(r, 1.0), (k, -1.0), (j, -r_k)], offset=v_ref * (1.0 - _SATURATED))
        # rho j - max(0, rho j + y) = 0
        rho = device.nominal("V_ref") / 0.01
        a.add(j, j, rho)
        a.branch(RAMP, [(j, -1.0)], [(j, rho), (y, 1.0)], offset=0.0)

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("K", "A"),)

    def controls(self, device: Device) -> tuple[str, ...]:
        return ("REF",)

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("zener-current", "A", ("I_ZM",), lambda v: v.i("K")),
            power(required=True),
            junction_temperature(),
        )


def starved(view: View, device: Device) -> Array:
    """Amperes by which the cathode current is below I_K_min."""
    return np.asarray(view.value("I_K_min") - view.i("K"))


KIND = ShuntReference(
    "shunt-reference",
    (("K", "A", "REF"),),
    keys={
        "V_ref": Key("V", positive=True),
        "I_K_min": Key("A", positive=True),
        "r_K": Key("ohm", least=0.0),
        "use": Key(words=("clamp",)),
    },
    ratings=("I_ZM", *POWER_RATINGS),
)
