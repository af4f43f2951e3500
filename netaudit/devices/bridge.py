"""``bridge``: four diodes of the named part, AC1 and AC2 to +, - to AC1 and AC2.

The keys of a junction may stand on the device line instead of a part: they are those of each diode.  Left out: breakdown.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Key, Kind, Values, View
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.diode import FORWARD_KEYS
from netaudit.devices.junction import forward, with_junction
from netaudit.devices.measured import check_measured, measured_growth, stamp_measured

_PAIRS = (("AC1", "+"), ("AC2", "+"), ("-", "AC1"), ("-", "AC2"))


def _forward(view: View) -> Array:
    """The largest of the four diodes' currents."""
    return np.asarray(np.max(np.stack([view.branch(k)[1] for k in range(4)]), axis=0))


def _reverse(view: View) -> Array:
    """The largest of the four diodes' reverse voltages."""
    return np.asarray(np.max(np.stack([view.v(q) - view.v(p) for p, q in _PAIRS]), axis=0))


@dataclass(frozen=True)
class Bridge(Kind):
    def resolve(self, device: Device) -> Device:
        if device.points:
            check_measured(device)
            return device
        return with_junction(device)

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        for p, q in _PAIRS:
            if device.points:
                stamp_measured(a, device, values, a.pin(p), a.pin(q))
            else:
                forward(a, values, a.pin(p), a.pin(q))

    def growth(self, device: Device) -> Growth:
        return measured_growth(device) if device.points else "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("forward-current", "A", ("I_F",), _forward, required=True),
            Check("reverse-voltage", "V", ("V_R", "V_RRM"), _reverse, required=True),
            power(),
            junction_temperature(),
        )


KIND = Bridge(
    "bridge",
    (("AC1", "AC2", "+", "-"),),
    keys={**FORWARD_KEYS, "I_R": Key("A", at="V", least=0.0)},
    ratings=("I_F", "V_R", "V_RRM", *POWER_RATINGS),
)
