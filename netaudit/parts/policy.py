"""Derating policies: what share of each rating a part may be used to.

A row is a factor on the rating, a cap (a temperature in degC) or an offset below it (kelvin); the lowest counts.  Rows
are found by part name, then by kind and symbol, then by symbol alone.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from netaudit.failure import InputError
from netaudit.parts.names import RATINGS
from netaudit.place import Place
from netaudit.quantities.read import read_number


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
    """The two-level table: the rows for diodes, references, suppressors and capacitors that could be read."""
    column = "severe" if severe else "benign"
    document = f"{_TWO_LEVEL}, {column}"

    def pick(a: float, b: float) -> Row:
        return Row(factor=a if severe else b, document=document)

    cap = Row(cap=95.0 if severe else 115.0, document=document)
    rows: dict[tuple[str, str], Row] = {}
    for kind in ("diode", "led", "bridge"):
        rows[(kind, "I_F")] = pick(0.9, 1.0)
        rows[(kind, "V_R")] = rows[(kind, "V_RRM")] = pick(0.7, 0.8)
        rows[(kind, "T_j")] = cap
    for kind in ("zener", "suppressor", "shunt-reference"):
        rows[(kind, "P_tot")] = rows[(kind, "I_ZM")] = pick(0.9, 1.0)
        rows[(kind, "T_j")] = cap
    rows[("capacitor", "V_R")] = pick(0.6, 0.7)
    rows[("capacitor-polarised", "V_R")] = pick(0.7, 0.8)
    return Policy(f"two-level-{column}", rows)


_QUALITY = "US Navy SD-18, discrete semiconductors, Table 1A"
#: (I_F, V_R, T_j) of signal diodes by level and environment (protected, normal, severe); None: not allowed
_SIGNAL: dict[int, tuple[tuple[float, float, float] | None, ...]] = {
    1: ((1.00, 0.95, 150.0), (1.00, 0.90, 125.0), (1.00, 0.85, 125.0)),
    2: ((0.90, 0.80, 100.0), (0.90, 0.75, 85.0), (0.70, 0.50, 70.0)),
    3: ((0.75, 0.70, 70.0), (0.70, 0.60, 35.0), None),
}
_ENVIRONMENTS = ("protected", "normal", "severe")


def _quality(level: int, environment: str) -> Policy:
    """Small-signal diodes by quality level and environment."""
    cell = _SIGNAL[level][_ENVIRONMENTS.index(environment)]
    name = f"quality-{level}-{environment}"
    if cell is None:
        raise InputError(
            f"policy {name}: this quality level is not allowed there ({_QUALITY})", mend="choose level 1 or 2"
        )
    document = f"{_QUALITY}, level {level}, {environment}"
    rows: dict[tuple[str, str], Row] = {}
    for kind in ("diode", "led", "bridge"):
        rows[(kind, "I_F")] = Row(factor=cell[0], document=document)
        rows[(kind, "V_R")] = rows[(kind, "V_RRM")] = Row(factor=cell[1], document=document)
        rows[(kind, "T_j")] = Row(cap=cell[2], document=document)
    return Policy(name, rows)


def policy_names() -> tuple[str, ...]:
    """The policies that ship."""
    quality = (
        f"quality-{n}-{e}" for n, cells in _SIGNAL.items() for e, c in zip(_ENVIRONMENTS, cells, strict=True) if c
    )
    return ("none", "cautious", "two-level-severe", "two-level-benign", *quality)


def load_policy(name: str) -> Policy:
    """A shipped policy by name, or a user's file (TOML: ``[kind]`` or ``[part]`` tables of symbol = "75%")."""
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
        return _from_file(name)
    raise InputError(f"there is no policy {name}", mend=f"one of {', '.join(policy_names())}, or a .toml file")


def policy_files(name: str) -> tuple[str, ...]:
    """The files that a policy is read from: its own, and those that it is based on."""
    found: list[str] = []
    while name.endswith(".toml") and name not in found:
        found.append(name)
        try:
            name = str(tomllib.loads(Path(name).read_text(encoding="utf-8-sig")).get("base", ""))
        except (OSError, ValueError):
            break
    return tuple(found)


def _from_file(path: str) -> Policy:
    try:
        text = Path(path).read_text(encoding="utf-8-sig")
        data = tomllib.loads(text)
    except (OSError, UnicodeDecodeError) as error:
        raise InputError(f"the policy {path} cannot be read: {error}") from None
    except tomllib.TOMLDecodeError as error:
        found = re.search(r"line (\d+)", str(error))
        raise InputError(f"not TOML: {error}", place=Place(path, int(found[1]) if found else 1)) from None
    base = load_policy(str(data.pop("base"))) if "base" in data else _NONE
    rows = dict(base.rows)
    for owner, table in data.items():
        entries = table if isinstance(table, dict) else {owner: table}
        for symbol, entry in entries.items():
            place = Place(path, _line_of(text, symbol))
            if symbol not in RATINGS and symbol != "value":
                raise InputError(
                    f"policy: unknown rating {symbol}", place=place, mend="use a symbol of the part tables"
                )
            rows[(owner if isinstance(table, dict) and owner != "all" else "", symbol)] = _row(entry, path, place)
    return Policy(Path(path).stem, rows)


def _line_of(text: str, word: str) -> int:
    return next((k for k, line in enumerate(text.splitlines(), start=1) if word in line), 1)


def _row(entry: Any, path: str, place: Place) -> Row:
    """``"75%"``, ``0.75``, ``"95degC"`` (a cap), ``"T_j - 40K"`` (an offset), or a list of them."""
    row = Row(document=path)
    for item in entry if isinstance(entry, list) else [entry]:
        text = str(item).strip()
        offset = re.fullmatch(r"\w+\s*-\s*(\S+)", text)
        if offset and not re.match(r"[\d.]", text):
            row = Row(row.factor, row.cap, read_number(offset[1], "K", place), path)
        elif text.endswith(("degC", "°C")):
            row = Row(row.factor, read_number(text, "degC", place), row.offset, path)
        else:
            factor = read_number(text, "1", place)
            if not 0 < factor <= 1:
                raise InputError(f"a share of {text}", place=place, mend="between 0 and 100 %")
            row = Row(factor, row.cap, row.offset, path)
    return row
