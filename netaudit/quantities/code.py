"""Value codes of resistors, capacitors and inductors (IEC 60062:2016): a letter stands in the place of the point.

The letters of the multipliers and of the tolerances are from memory of the standard; its examples (R47, 4R7, 470R, 4K7,
47K, 47K3, 470K, 4M7) are read in it and stand in the tests.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from types import MappingProxyType

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.text import shown

#: canonical unit -> letter of the code -> decimal exponent.  Where the standard gives L for milliohm, boards were built
#: with 0.33 ohm instead of 330 ohm (330L): it is refused with a question.
LETTERS = MappingProxyType(
    {
        "ohm": MappingProxyType({"R": 0, "k": 3, "K": 3, "M": 6, "G": 9, "T": 12, "m": -3}),
        "F": MappingProxyType({"p": -12, "n": -9, "u": -6, "µ": -6, "μ": -6, "m": -3, "F": 0}),
        "H": MappingProxyType({"p": -12, "n": -9, "u": -6, "µ": -6, "μ": -6, "m": -3}),
    }
)

#: tolerance letter -> (below, above) in percent
TOLERANCES = MappingProxyType(
    {
        letter: (-percent, percent)
        for letter, percent in {
            "E": 0.005,
            "L": 0.01,
            "P": 0.02,
            "W": 0.05,
            "B": 0.1,
            "C": 0.25,
            "D": 0.5,
            "F": 1.0,
            "G": 2.0,
            "H": 3.0,
            "J": 5.0,
            "K": 10.0,
            "M": 20.0,
            "N": 30.0,
        }.items()
    }
    | {"Q": (-10.0, 30.0), "T": (-10.0, 50.0), "S": (-20.0, 50.0), "Z": (-20.0, 80.0)}
)

_CODE = re.compile(r"([+-]?)([0-9]*)([RLkKMGTpnuµμmF])([0-9]*)([A-Z]?)")
#: below this the tolerance letters of a capacitor mean picofarads in the standard, not percent
_SMALL = 10e-12


@dataclass(frozen=True, slots=True)
class Code:
    """A value read from a code, with the limits of its tolerance letter in percent (None without one)."""

    value: float
    tolerance: tuple[float, float] | None


def looks_coded(text: str) -> bool:
    """Whether the text has the shape of a value code that starts with its letter (``R047``)."""
    match = _CODE.fullmatch(text)
    return match is not None and not match[2] and bool(match[4])


def read_code(text: str, unit: str, place: Place) -> Code | None:
    """The value of a code for a resistance (ohm), capacitance (F) or inductance (H); None when the text is no code.

    Raises InputError for a code that can be misread: ``L`` for milliohm, ``F`` or ``H`` after the code of a capacitance
    or inductance, a tolerance letter without a digit before it, and a small capacitor's tolerance letter.
    """
    match = _CODE.fullmatch(text)
    if match is None or unit not in LETTERS or not (match[2] or match[4]):
        return None
    sign, whole, letter, part, tail = match.groups()
    if unit == "ohm" and letter == "L":
        raise InputError(
            f"{shown(text)} can be misread: L is milliohm in a value code",
            place=place,
            mend=f"write {whole or 0}{'.' + part if part else ''}mohm, or R or k where ohm or kilohm is meant",
        )
    if letter not in LETTERS[unit]:
        return None
    if tail:
        _check_tail(text, unit, place, part, tail)
    value = float(f"{sign}{whole or 0}.{part or 0}e{LETTERS[unit][letter]}")
    if tail and unit == "F" and abs(value) < _SMALL and tail in "BCDFG":
        raise InputError(
            f"{shown(text)} can be misread: below 10 pF the letter {tail} means picofarads",
            place=place,
            mend="write the tolerance out, for example 4p7 ±0.25pF",
        )
    return Code(value, TOLERANCES[tail] if tail else None)


def _check_tail(text: str, unit: str, place: Place, part: str, tail: str) -> None:
    """Refuses a letter after a code that is not clearly a tolerance."""
    if unit != "ohm" and tail in "FH":
        raise InputError(
            f"{shown(text)}: is the last {tail} the unit or a tolerance letter?",
            place=place,
            mend=f"leave the unit out ({text[:-1]}) or write a point and the unit (4.7u{unit})",
        )
    if not part or tail not in TOLERANCES:
        raise InputError(
            f"{shown(text)}: {tail} is no tolerance letter here",
            place=place,
            mend="a tolerance letter follows a code with a digit after its letter (4k7J); else write it out: 47k 5%",
        )
