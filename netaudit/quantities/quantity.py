"""A value with its unit, its nominal and its span: one record from the parser to the report."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Spread = Literal["none", "range", "absolute", "percent"]


@dataclass(frozen=True, slots=True)
class Quantity:
    """A physical value in SI units (temperatures in degC, differences of temperature in K).

    ``low <= nominal <= high``; ``spread`` says where the span comes from: ``range`` (what the value may take in
    operation), ``absolute`` or ``percent`` (tolerance between specimens), ``none`` (held at nominal, ``low == high``).
    ``unit`` is the canonical unit symbol of ``netaudit.quantities.units``.
    """

    nominal: float
    unit: str
    low: float
    high: float
    spread: Spread = "none"

    @property
    def varies(self) -> bool:
        return self.low < self.high


def exact(nominal: float, unit: str) -> Quantity:
    """A quantity without spread."""
    return Quantity(nominal, unit, nominal, nominal)
