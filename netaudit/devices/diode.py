"""``diode`` and ``led``: a junction with leakage, or a measured curve; breakdown where V_Z is given.

    i = I_S (exp(w / n V_T) - 1),  v = w + R_S i,  I_S(T) = I_S(T_0) (T/T_0)^(x/n) exp[E_g/(n k) (1/T_0 - 1/T)]

x = 3, or 2 for a Schottky junction; alpha_VF at a current wins over E_g.  I_R at a voltage is a conductance that doubles
each 10 K.  Left out: high injection, recovery, the voltage dependence of leakage.
"""

from __future__ import annotations

from dataclasses import dataclass

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Key, Kind, Values, View
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.junction import breakdown, forward, with_breakdown, with_junction
from netaudit.devices.measured import check_measured, measured_growth, stamp_measured

#: the forward junction alone
FORWARD_KEYS = {
    "I_S": Key("A", positive=True),
    "n": Key("1", positive=True),
    "R_S": Key("ohm", least=0.0),
    "T_0": Key("degC"),
    "E_g": Key("eV", positive=True),
    "alpha_VF": Key("V/K", at="A"),
    "material": Key(),
}
JUNCTION_KEYS = {
    **FORWARD_KEYS,
    "I_R": Key("A", at="V", least=0.0),
    "V_Z": Key("V", positive=True),
    "I_Z": Key("A", positive=True),
    "r_Z": Key("ohm", positive=True),
    "r_ZK": Key("ohm", positive=True),
    "alpha_VZ": Key("1/K"),
}
#: a part that is meant to stay off says so
USE = Key(words=("clamp",))


@dataclass(frozen=True)
class Diode(Kind):
    def resolve(self, device: Device) -> Device:
        if device.points:
            check_measured(device)
            return device
        return with_breakdown(with_junction(device))

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        p, q = a.pin("A"), a.pin("K")
        if device.points:
            stamp_measured(a, device, values, p, q)
            return
        forward(a, values, p, q)
        if values.has("V_Z"):
            breakdown(a, values, q, p)

    def growth(self, device: Device) -> Growth:
        return measured_growth(device) if device.points else "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("forward-current", "A", ("I_F",), lambda view: view.i("A"), required=True),
            Check("reverse-voltage", "V", ("V_R", "V_RRM"), lambda view: view.v("K") - view.v("A"), required=True),
            power(),
            junction_temperature(),
        )

    def requirement(self, view: View, device: Device) -> Array:
        return view.i("A")


KIND = Diode(
    "diode", (("A", "K"),), keys={**JUNCTION_KEYS, "use": USE}, ratings=("I_F", "V_R", "V_RRM", *POWER_RATINGS)
)
