"""``unmodelled``: a part without a model; no current, or the currents that its ``covered`` line says it draws."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Assembly, Device, Growth, Kind, Values


@dataclass(frozen=True)
class Unmodelled(Kind):
    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        for source, sink, _ in device.draws:
            drawn = np.asarray(values[f"{source}:{sink}"])
            a.source(a.pin(source), -drawn)
            a.source(a.pin(sink), drawn)

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return ()

    def growth(self, device: Device) -> Growth:
        return "increasing"


KIND = Unmodelled("unmodelled", (), heats=False)
