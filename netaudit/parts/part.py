"""A row of a part table: model, ratings, package pins, each with its origin; what is missing is missing."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from netaudit.place import Place
from netaudit.quantities.quantity import Quantity

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True)
class Rating:
    """A limit by its IEC 60747 letter symbol, in SI units.

    ``points`` are (temperature in degC, value) pairs in rising temperature, straight between them, level outside; a
    rating without a temperature has one pair whose temperature is nan.
    ``origin`` names the table row or the netlist line it came from.
    """

    symbol: str
    points: tuple[tuple[float, float], ...]
    origin: str = ""
    generic: bool = False

    def at(self, temperature: ArrayLike) -> NDArray[np.float64]:
        """The limit at a temperature in degC, any shape."""
        t = np.asarray(temperature, dtype=float)
        if len(self.points) == 1:
            return np.full(t.shape, self.points[0][1])
        xs, ys = zip(*self.points, strict=True)
        return np.asarray(np.interp(t, xs, ys), dtype=float)

    @property
    def nominal(self) -> float:
        """The value at the lowest stated temperature."""
        return self.points[0][1]


@dataclass(frozen=True)
class Part:
    """One part of a table.

    ``parameters`` are model values by the names of ``netaudit.parts.names`` (already fitted: ``forward`` points have
    become I_S, n, R_S); a value that is stated at a condition (``"100uA @ 40V"``) has the condition under ``name.at``
    (``I_R`` and ``I_R.at``).  ``words`` holds texts such as ``material``; ``points`` a whole measured curve as
    (voltage, current); ``spread`` is folded into ``parameters`` where the name is a parameter, and stays under the
    parameter ``V_F`` (nominal 0: a shift of the forward voltage) for junctions.
    ``rough`` says why the model is only a rough one (a material default, a generic class), empty when it is the part's own.
    """

    name: str
    kind: str | None
    place: Place
    block: str | None = None
    parameters: Mapping[str, Quantity] = field(default_factory=dict)
    words: Mapping[str, str] = field(default_factory=dict)
    points: tuple[tuple[float, float], ...] = ()
    ratings: Mapping[str, Rating] = field(default_factory=dict)
    pins: Mapping[str, str] = field(default_factory=dict)
    pin_limits: Mapping[str, tuple[float, float]] = field(default_factory=dict)
    source: str = ""
    fit_error: float | None = None
    rough: str = ""
    generic: bool = False
