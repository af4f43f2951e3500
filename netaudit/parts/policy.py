"""Derating policies: what share of each rating a part may be used to.

A row is a factor on the rating, a cap (a temperature in degC) or an offset below it (kelvin); the lowest counts.  Rows
are found by part name, then by class (``diode-signal``, ``diode-rectifier``, ``diode-schottky``,
``bridge-rectifier``, ``bridge-schottky``, ``capacitor-polarised``), then by kind,
then by symbol alone.  A shipped table speaks only of what the published one covers.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from netaudit.failure import InputError
from netaudit.syntax.suggest import closest


@dataclass(frozen=True)
class Row:
    """One row: ``factor`` of the rating, ``cap`` in degC, ``offset`` kelvin below the rating; ``document`` it is from."""

    factor: float | None = None
    cap: float | None = None
    offset: float | None = None
    document: str = ""

    def limit(self, rating: NDArray[np.float64]) -> NDArray[np.float64]:
        out = rating
        if self.factor is not None:
            out = np.minimum(out, rating * self.factor)
        if self.cap is not None:
            out = np.minimum(out, self.cap)
        if self.offset is not None:
            out = np.minimum(out, rating - self.offset)
        return out

    def __str__(self) -> str:
        said = []
        if self.factor is not None:
            said.append(f"{self.factor * 100:g} % of the rating")
        if self.cap is not None:
            said.append(f"at most {self.cap:g} degC")
        if self.offset is not None:
            said.append(f"{self.offset:g} K below the rating")
        return ", ".join(said)


@dataclass(frozen=True)
class Policy:
    """``rows``: {(part or kind or "", symbol): Row}."""

    name: str
    rows: Mapping[tuple[str, str], Row] = field(default_factory=dict)

    def row(self, owners: Sequence[str], symbols: Sequence[str]) -> Row | None:
        """The row of the first owner (part name, kind, ...) that has one for a symbol; None: the factor is 1."""
        for owner in (*owners, ""):
            for symbol in symbols:
                found = self.rows.get((owner, symbol))
                if found is not None:
                    return found
        return None


_CAUTIOUS = "cautious: common practice"
_NONE = Policy("none")
#: continuous forward current from which on a diode counts as a power rectifier, A (common practice)
RECTIFIER = 1.0


def _cautious() -> Policy:
    share = {
        "I_F": 0.75, "V_R": 0.8, "V_RRM": 0.8, "P_tot": 0.6, "V_RWM": 1.0, "I_ZM": 0.75, "V_max": 0.8, "I_C": 0.75,
        "I_B": 0.75, "V_CEO": 0.8, "V_CBO": 0.8, "V_EBO": 0.8, "I_D": 0.75, "V_DS": 0.8, "V_GS": 0.8, "I_max": 0.75,
        "V_I": 0.9, "I_O": 0.8,
    }  # fmt: skip
    rows = {("", symbol): Row(factor=f, document=_CAUTIOUS) for symbol, f in share.items()}
    rows[("", "T_j")] = Row(cap=110.0, offset=25.0, document=_CAUTIOUS)
    rows[("capacitor", "V_R")] = Row(factor=0.6, document=_CAUTIOUS)
    rows[("capacitor-polarised", "V_R")] = Row(factor=0.7, document=_CAUTIOUS)
    rows[("fuse", "value")] = Row(factor=0.75, document=_CAUTIOUS)
    rows[("led", "I_F")] = Row(factor=0.75, document=_CAUTIOUS)
    rows[("resistor", "P_tot")] = Row(factor=0.6, document=_CAUTIOUS)
    return Policy("cautious", rows)


_TWO_LEVEL = "Reliability Analysis Center, Part Derating Parameters"


def _two_level(severe: bool) -> Policy:
    """The two-level table: its rows for diodes, reference diodes, suppressors and capacitors.

    Its Schottky row is that of microwave diodes, by power instead of current.  LEDs, shunt references (integrated
    circuits), transistors and resistors are not in the part of the table that could be read: they have no row.
    """
    column = "severe" if severe else "benign"
    document = f"{_TWO_LEVEL}, {column}"

    def pick(a: float, b: float) -> Row:
        return Row(factor=a if severe else b, document=document)

    cap = Row(cap=95.0 if severe else 115.0, document=document)
    rows: dict[tuple[str, str], Row] = {}
    for owner, symbol, _ in _CLASSES:
        rows[(owner, symbol)] = pick(0.9, 1.0)
        rows[(owner, "V_R")] = rows[(owner, "V_RRM")] = pick(0.7, 0.8)
        rows[(owner, "T_j")] = cap
    rows[("zener", "I_ZM")] = pick(0.9, 1.0)
    for kind in ("zener", "suppressor"):
        rows[(kind, "P_tot")] = pick(0.9, 1.0)
        rows[(kind, "T_j")] = cap
    rows[("capacitor", "V_R")] = pick(0.6, 0.7)
    rows[("capacitor-polarised", "V_R")] = pick(0.7, 0.8)
    return Policy(f"two-level-{column}", rows)


_QUALITY = "US Navy SD-18, discrete semiconductors, Table 1A"
_ENVIRONMENTS = ("protected", "normal", "severe")
_Cell = tuple[float, float, float]
#: (share of the first symbol, of V_R, cap of T_j in degC) by level in each environment; level 3 is not allowed in severe
_SIGNAL: dict[int, tuple[_Cell, ...]] = {
    1: ((1.00, 0.95, 150.0), (1.00, 0.90, 125.0), (1.00, 0.85, 125.0)),
    2: ((0.90, 0.80, 100.0), (0.90, 0.75, 85.0), (0.70, 0.50, 70.0)),
    3: ((0.75, 0.70, 70.0), (0.70, 0.60, 35.0)),
}
_RECTIFIER: dict[int, tuple[_Cell, ...]] = {
    1: ((1.00, 0.95, 150.0), (1.00, 0.90, 125.0), (0.90, 0.85, 125.0)),
    2: ((0.90, 0.80, 100.0), (0.85, 0.75, 85.0), (0.60, 0.30, 70.0)),
    3: ((0.60, 0.50, 70.0), (0.50, 0.30, 35.0)),
}
_SCHOTTKY: dict[int, tuple[_Cell, ...]] = {
    1: ((1.00, 0.95, 150.0), (1.00, 0.90, 125.0), (0.90, 0.85, 125.0)),
    2: ((0.90, 0.80, 100.0), (0.90, 0.80, 85.0), (0.50, 0.25, 70.0)),
    3: ((0.75, 0.50, 70.0), (0.75, 0.30, 35.0)),
}
#: whose row, and the symbol that its first column limits
_CLASSES = (
    ("diode-signal", "I_F", _SIGNAL),
    ("diode-rectifier", "I_F", _RECTIFIER),
    ("bridge-rectifier", "I_F", _RECTIFIER),
    ("diode-schottky", "P_tot", _SCHOTTKY),
    ("bridge-schottky", "P_tot", _SCHOTTKY),
)


def _quality(level: int, environment: str) -> Policy:
    """Silicon diodes by quality level and environment: small signal, power rectifier, Schottky (by power)."""
    column = _ENVIRONMENTS.index(environment)
    name = f"quality-{level}-{environment}"
    if column >= len(_SIGNAL[level]):
        raise InputError(
            f"policy {name}: this quality level is not allowed there ({_QUALITY})", mend="choose level 1 or 2"
        )
    document = f"{_QUALITY}, level {level}, {environment}"
    rows: dict[tuple[str, str], Row] = {}
    for owner, symbol, table in _CLASSES:
        first, volts, cap = table[level][column]
        rows[(owner, symbol)] = Row(factor=first, document=document)
        rows[(owner, "V_R")] = rows[(owner, "V_RRM")] = Row(factor=volts, document=document)
        rows[(owner, "T_j")] = Row(cap=cap, document=document)
    return Policy(name, rows)


def policy_names() -> tuple[str, ...]:
    """The policies that ship."""
    quality = (f"quality-{n}-{e}" for n, cells in _SIGNAL.items() for e, _ in zip(_ENVIRONMENTS, cells, strict=False))
    return ("none", "cautious", "two-level-severe", "two-level-benign", *quality)


def load_policy(name: str) -> Policy:
    """A shipped policy by name, or a user's file (``netaudit.parts.policy_file``)."""
    if name == "none":
        return _NONE
    if name == "cautious":
        return _cautious()
    if name in ("two-level-severe", "two-level-benign"):
        return _two_level(name.endswith("severe"))
    match = re.fullmatch(r"quality-([123])-(protected|normal|severe)", name)
    if match:
        return _quality(int(match[1]), match[2])
    if name.endswith(".toml"):
        from netaudit.parts.policy_file import read_policy

        return read_policy(name)
    near = closest(name, policy_names())
    hint = f"did you mean {near}?" if near else f"one of {', '.join(policy_names())}, or a .toml file"
    raise InputError(f"there is no policy {name}", mend=hint)


def diode_class(kind: str, schottky: bool, amperes: float | None) -> str:
    """The class under which published tables speak of a diode or bridge: ``-schottky``, ``-rectifier`` (every bridge, a
    diode of 1 A or more: common practice) or ``-signal`` behind the kind; empty for other kinds."""
    if kind not in ("diode", "bridge"):
        return ""
    if schottky:
        return f"{kind}-schottky"
    strong = kind == "bridge" or (amperes is not None and amperes >= RECTIFIER)
    return f"{kind}-rectifier" if strong else f"{kind}-signal"
