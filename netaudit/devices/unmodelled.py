"""``unmodelled``: a part without a model; no current, or the currents that its ``covered`` line says it draws.

A drawn current fades below 1 V across its two pins, in a straight line to 0 at 0 V, as that of a ``load`` does: a part
whose supply is off draws nothing.  A negative one (the part delivers) is held whatever the voltage.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Assembly, Device, Growth, Kind, Values
from netaudit.devices.rows import quiescent


@dataclass(frozen=True)
class Unmodelled(Kind):
    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        for source, sink, _ in device.draws:
            drawn = np.asarray(values[f"{source}:{sink}"])
            if device.nominal(f"{source}:{sink}") > 0.0:
                quiescent(a, a.pin(source), a.pin(sink), drawn)
            else:
                a.source(a.pin(source), -drawn)
                a.source(a.pin(sink), drawn)

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return ()

    def growth(self, device: Device) -> Growth:
        return "nondecreasing" if device.draws else "increasing"


KIND = Unmodelled("unmodelled", (), heats=False)
