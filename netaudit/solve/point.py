"""Operating points as results: values with their certificate, never a silent last iterate."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal, Protocol

from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import View

Uniqueness = Literal["proven", "complete", "searched"]


class Views(Protocol):
    """The devices of a solved batch by designator."""

    def __call__(self, device: str) -> View: ...


@dataclass(frozen=True)
class Point:
    """One operating point with its certificate.

    ``residual_current``: the largest |sum of pin currents| over the nets in amperes; ``power_imbalance``: |sum of all
    devices' power| over the sum of magnitudes (Tellegen; dimensionless); ``nets``: volts; ``temperatures``: degC of each
    device; ``view(designator)`` shows a device (arrays of shape ()).
    """

    nets: Mapping[str, float]
    temperatures: Mapping[str, float]
    view: Views
    method: str
    iterations: int
    residual_current: float
    power_imbalance: float
    stable: bool | None = None
    stable_because: str = ""
    thermal_gain: Mapping[str, float] = field(default_factory=dict)


@dataclass(frozen=True)
class ModeResult:
    """What solving one mode gave: its points (none: ``failure`` says what was tried and where it stuck)."""

    circuit: Circuit
    points: tuple[Point, ...]
    uniqueness: Uniqueness
    because: str
    failure: str = ""
    failure_net: str | None = None
    runaway: tuple[str, ...] = ()

    @property
    def mode(self) -> str:
        return self.circuit.mode
