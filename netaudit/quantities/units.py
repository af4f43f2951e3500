"""Units: the canonical symbols, what each measures, and every form in which it may be written.

Canonical symbols are SI (temperatures in degC, differences of temperature in K).  A written form carries a decimal
exponent: ``mV`` is V with -3, ``ppm/K`` is 1/K with -6, so that text is scaled in decimal and rounded once.
Prefixes: SI Brochure, 9th edition, table 7 (atto to tera); case tells milli from mega.
"""

from __future__ import annotations

from dataclasses import dataclass
from types import MappingProxyType

#: SI prefix to decimal exponent; both code points of the micro sign
PREFIXES = MappingProxyType(
    {
        "a": -18,
        "f": -15,
        "p": -12,
        "n": -9,
        "u": -6,
        "\u00b5": -6,
        "\u03bc": -6,
        "m": -3,
        "k": 3,
        "M": 6,
        "G": 9,
        "T": 12,
    }
)
#: the prefix printed for a decimal exponent
PREFIX_OF = MappingProxyType({v: k for k, v in PREFIXES.items() if k.isascii()} | {0: ""})


@dataclass(frozen=True, slots=True)
class Unit:
    """A canonical unit: its symbol, what it measures, an example for messages, its written forms.

    ``scaled`` forms take SI prefixes; ``plain`` forms (form, decimal exponent) take none.  ``people`` is the form and
    exponent that a report prints.
    """

    symbol: str
    meaning: str
    example: str
    scaled: tuple[str, ...] = ()
    plain: tuple[tuple[str, int], ...] = ()
    people: tuple[str, int] | None = None


_UNITS = (
    Unit("V", "a voltage", "12V", ("V",)),
    Unit("A", "a current", "20mA", ("A",)),
    Unit("W", "a power", "250mW", ("W",)),
    Unit("ohm", "a resistance", "4.7kohm", ("ohm", "\u03a9", "\u2126")),
    Unit("F", "a capacitance", "10uF", ("F",)),
    Unit("H", "an inductance", "10uH", ("H",)),
    Unit("S", "a conductance", "1mS", ("S",)),
    Unit("degC", "a temperature", "25degC", plain=(("degC", 0), ("°C", 0), ("℃", 0)), people=("degC", 0)),
    Unit("K", "a difference of temperatures", "40K", ("K",), people=("K", 0)),
    Unit("1", "a number without unit", "0.85", plain=(("%", -2), ("ppm", -6)), people=("", 0)),
    Unit("K/W", "a thermal resistance", "450K/W", ("K/W",), people=("K/W", 0)),
    Unit(
        "1/K",
        "a temperature coefficient",
        "50ppm/K",
        plain=(("/K", 0), ("1/K", 0), ("%/K", -2), ("ppm/K", -6)),
        people=("ppm/K", -6),
    ),
    Unit(
        "1/K2",
        "a second temperature coefficient",
        "-0.6ppm/K2",
        plain=tuple((f"{f}K{two}", e) for f, e in (("/", 0), ("1/", 0), ("%/", -2), ("ppm/", -6)) for two in "2²"),
        people=("ppm/K2", -6),
    ),
    Unit("V/K", "a voltage by temperature", "-2mV/K", ("V/K",), people=("mV/K", -3)),
    Unit("A/V2", "a current by squared voltage", "0.5A/V2", ("A/V2", "A/V²")),
    Unit("eV", "an energy", "1.12eV", ("eV",)),
)

UNITS = MappingProxyType({u.symbol: u for u in _UNITS})


def _forms(unit: Unit) -> dict[str, int]:
    """Every written form of the unit, prefixes applied, with its decimal exponent."""
    forms = dict(unit.plain)
    for form in unit.scaled:
        forms[form] = 0
        forms |= {prefix + form: exponent for prefix, exponent in PREFIXES.items()}
    return forms


#: canonical unit -> written form -> decimal exponent
FORMS = MappingProxyType({u.symbol: MappingProxyType(_forms(u)) for u in _UNITS})


def written(unit: str) -> str:
    """The form in which a bare SI number of this unit is printed in the language (``/K`` for 1/K, nothing for 1)."""
    return {"1": "", "1/K": "/K", "1/K2": "/K2"}.get(unit, unit)


def measures(form: str) -> tuple[str, ...]:
    """The canonical units that a written form can stand for (empty: no unit of the language)."""
    return tuple(symbol for symbol, forms in FORMS.items() if form in forms)
