"""Junction materials: what is known of a junction when only its material or colour is stated.

Every figure is common practice, not a data sheet: knees of about 0.7 V (silicon), 0.3 V (germanium), 0.3 V (Schottky),
1.8 to 2 V (red), 2 to 2.2 V (yellow, green), 2.8 to 3.2 V (blue, white) near 10 mA.  A model that leans on them alone
is rough, and reports say so.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from netaudit.failure import InputError
from netaudit.place import Place

_VT = 1.380649e-23 * 298.15 / 1.602176634e-19


@dataclass(frozen=True)
class Material:
    """``E_g`` in eV and ``exponent`` x of T^(x/n) for I_S(T); n, I_S (A) and R_S (ohm) of a typical small part."""

    name: str
    E_g: float
    exponent: float
    n: float
    I_S: float
    R_S: float


def _knee(name: str, E_g: float, exponent: float, n: float, volts: float, R_S: float) -> Material:
    """A material whose typical part drops ``volts`` at 10 mA, R_S included."""
    return Material(name, E_g, exponent, n, 0.01 * math.exp(-(volts - 0.01 * R_S) / (n * _VT)), R_S)


MATERIALS: dict[str, Material] = {
    m.name: m
    for m in (
        _knee("silicon", 1.12, 3.0, 1.8, 0.72, 0.5),
        _knee("germanium", 0.66, 3.0, 1.3, 0.33, 2.0),
        _knee("schottky", 0.69, 2.0, 1.05, 0.30, 0.5),
        _knee("gaas", 1.42, 3.0, 1.8, 1.20, 2.0),
        _knee("gaasp", 1.90, 3.0, 1.9, 1.95, 4.0),
        _knee("algainp", 2.00, 3.0, 1.9, 1.98, 4.0),
        _knee("gap", 2.26, 3.0, 1.9, 2.10, 6.0),
        _knee("ingan", 2.70, 3.0, 2.5, 2.95, 8.0),
    )
}
_ALIASES = {
    "si": "silicon",
    "ge": "germanium",
    "infrared": "gaas",
    "red": "gaasp",
    "orange": "algainp",
    "amber": "algainp",
    "yellow": "algainp",
    "green": "gap",
    "blue": "ingan",
    "white": "ingan",
    "gan": "ingan",
    "algaas": "gaasp",
}


def material(name: str, place: Place) -> Material:
    """The material of that name or colour, without regard to case; InputError for one that is not known."""
    key = name.casefold()
    found = MATERIALS.get(_ALIASES.get(key, key))
    if found is None:
        known = ", ".join(sorted({*MATERIALS, *_ALIASES}))
        raise InputError(f"unknown material {name!r}", place=place, mend=f"one of {known}")
    return found


def zener_class(V_Z: float) -> tuple[float, float]:
    """(I_Z in A, r_Z in ohm) typical of 500 mW parts of that voltage (from memory; common practice): the resistance is
    lowest near 7 V and grows to both sides."""
    table = ((2.4, 100.0), (3.3, 95.0), (4.3, 75.0), (5.1, 50.0), (5.6, 30.0), (6.2, 10.0), (7.5, 8.0), (9.1, 12.0),
             (12.0, 25.0), (18.0, 45.0), (27.0, 80.0), (39.0, 130.0), (75.0, 250.0))  # fmt: skip
    r = table[-1][1] * V_Z / table[-1][0] if table[-1][0] < V_Z else next(r for v, r in table if v >= V_Z)
    return 5e-3, r
