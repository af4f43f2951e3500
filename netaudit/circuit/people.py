"""Values as people write them in capture tools: ``4,7к``, ``180 Ом``, ``0,1мк``, ``0.25W``, ``10uF/16V``."""

from __future__ import annotations

import re
from dataclasses import dataclass

#: letters of other alphabets to the prefixes and units of the netlist language, longest first
_LETTERS = (
    ("МОм", "Mohm"), ("мОм", "mohm"), ("кОм", "kohm"), ("Ом", "ohm"), ("Ohms", "ohm"), ("Ohm", "ohm"), ("OHM", "ohm"),
    ("ohms", "ohm"), ("Ω", "ohm"), ("мкФ", "uF"), ("нФ", "nF"), ("пФ", "pF"), ("мкГн", "uH"), ("мГн", "mH"), ("нГн", "nH"),
    ("Гн", "H"), ("мк", "u"), ("мВт", "mW"), ("Вт", "W"), ("мВ", "mV"), ("кВ", "kV"), ("В", "V"), ("мкА", "uA"),
    ("мА", "mA"), ("А", "A"), ("Ф", "F"), ("к", "k"), ("К", "K"), ("М", "M"), ("м", "m"), ("н", "n"), ("п", "p"),
)  # fmt: skip
_TOLERANCE = re.compile(r"(?:±|\+/-|\+-)?\s*(\d+(?:\.\d+)?)\s*%")
_NUMBER = re.compile(
    r"^(?P<n>\d+(?:\.\d+)?|\.\d+)(?P<tail>(?:[fpnuµμmkKMGT]|meg|Meg|MEG)?(?:ohm|F|H|V|W|A)?|R)$|"
    r"^(?P<code>\d*[RrkKMGpnuµμm]\d+)(?P<unit>ohm|F|H)?$"
)


@dataclass(frozen=True)
class Written:
    """A value in the netlist language's own spelling, and a tolerance where one was written with it."""

    value: str
    tolerance: str = ""


def read_people(text: str, unit: str) -> Written | None:
    """The value for a canonical unit; None when it cannot be read as one (never a guess)."""
    plain = text.strip().replace("\u00a0", " ")
    plain = re.sub(r"(?<=\d),(?=\d)", ".", plain)
    for there, here in _LETTERS:
        plain = plain.replace(there, here)
    tolerance = _TOLERANCE.search(plain)
    plain = _TOLERANCE.sub(" ", plain)
    words = re.sub(r"(?<=\d)\s+(?=[fpnuµμmkKMGT]?(?:ohm|F|H|V|W|A)\b)", "", plain)
    words = re.sub(r"(?<=\d)\s+(?=[fpnuµμmkMGT]\b)", "", words)
    for word in re.split(r"[\s/;,|]+", words):
        found = _one(word, unit)
        if found is not None:
            return Written(found, f"{tolerance[1]}%" if tolerance else "")
    return None


def _one(word: str, unit: str) -> str | None:
    match = _NUMBER.match(word)
    if match is None:
        return None
    if match["code"]:
        if match["unit"] and match["unit"] != unit:
            return None
        code = match["code"]
        letter = re.sub(r"\d", "", code)
        allowed = {"ohm": "RrkKMGm", "F": "pnuµμm", "H": "pnuµμm"}.get(unit, "")
        if letter not in allowed:
            return None
        return code.replace("r", "R")
    number, tail = match["n"], match["tail"]
    if number.startswith("."):
        number = f"0{number}"
    for ending in ("ohm", "F", "H", "V", "W", "A"):
        if tail.endswith(ending):
            if ending != unit:
                return None
            tail = tail[: -len(ending)]
            break
    tail = {"K": "k", "meg": "M", "Meg": "M", "MEG": "M", "R": ""}.get(tail, tail)
    if unit in ("F", "H") and not tail and match["tail"] == "" and "." not in number:
        # a bare "100" on a capacitor may mean picofarads, microfarads or a code: not readable
        return None
    return f"{number}{tail}{unit}"
