"""Values as people write them in capture tools: ``4,7к``, ``180 Ом``, ``0,1мк``, ``0.25W``, ``1/4 W``, ``10uF/16V``."""

from __future__ import annotations

import re
from dataclasses import dataclass

#: spellings of units and prefixes, in this order, to those of the netlist language
_SPELLINGS = tuple(
    (re.compile(pattern), here)
    for pattern, here in (
        (r"(?i:ohms?)\b|\u2126|\u03a9|(?<![A-Za-zА-я])[Оо]м(?![А-я])|(?<=[\dкКмМ ])[Оо]м(?![А-я])", "ohm"),
        (r"мк(?=[ФГА])|мк\b", "u"), (r"мВт", "mW"), (r"кВт", "kW"), (r"Вт", "W"), (r"мВ", "mV"), (r"кВ", "kV"),
        (r"(?<=[\d m])В\b", "V"), (r"Гн", "H"), (r"Ф", "F"), (r"мА", "mA"), (r"(?<=[\d um])А\b", "A"),
        (r"(?<=[\d ])[кК](?=\b|ohm)", "k"), (r"(?<=[\d ])М(?=\b|ohm)", "M"), (r"(?<=[\d ])м(?=\b|ohm|[FH])", "m"),
        (r"(?<=[\d ])н(?=\b|[FH])", "n"), (r"(?<=[\d ])п(?=\b|[FH])", "p"),
        (r"(?<=\d)[кК](?=\d)", "k"), (r"(?<=\d)М(?=\d)", "M"),
        (r"[\u00b5\u03bc]", "u"),
        (r"(?<=[\d ])([pnuPNU])[fF]\b", r"\1F"), (r"(?<=[\d ])([nuNU])[hH]\b", r"\1H"), (r"(?<=[\d ])mh\b", "mH"),
        (r"(?<=[\d ])([PNU])(?=[FH]\b)", lambda m: m[1].lower()),
        (r"(?i:(?<=[\d ])meg)(?=\b|ohm)", "M"), (r"(?i:(?<=[\d ])volts?)\b", "V"), (r"(?i:(?<=[\d ])watts?)\b", "W"),
        (r"(?<=\d)v\b", "V"), (r"(?<=\d)w\b", "W"), (r"(?<=[\dm])a\b", "A"),
    )
)  # fmt: skip
_TOLERANCE = re.compile(r"(?:±|\+/-|\+-|\+ -)?\s*(\d+(?:\.\d+)?)\s*%")
_UNEQUAL = re.compile(
    r"\+\s*(\d+(?:\.\d+)?)\s*%?\s*/?\s*-\s*(\d+(?:\.\d+)?)\s*%|-\s*(\d+(?:\.\d+)?)\s*%?\s*/?\s*\+\s*(\d+(?:\.\d+)?)\s*%"
)
_FRACTION = re.compile(r"(?<![\d.])(\d+)/(\d+)\s*W\b")
_GROUPED = re.compile(r"(?<![\d.,])[1-9]\d{0,2},\d{3}(?![\d])")
_SIZES = frozenset(
    {"0201", "0402", "0603", "0805", "0815", "1005", "1206", "1210", "1218", "1608", "1806", "1808", "1812", "2010"}
    | {"2012", "2220", "2225", "2512", "3216", "3225"}
)
_NUMBER = re.compile(r"^(?P<n>\d+(?:\.\d+)?|\.\d+)(?P<tail>[fpnumkKMGTR]?(?:ohm|F|H|V|W|A)?)$")
_CODE = re.compile(r"^(?P<code>\d*[RrkKMGpnum]\d+)(?P<unit>ohm|[FH])?(?P<tolerance>[BCDFGJKM])?$")
#: IEC 60062 letter codes of symmetric tolerances, per cent
_LETTERS = {"B": 0.1, "C": 0.25, "D": 0.5, "F": 1, "G": 2, "J": 5, "K": 10, "M": 20}
_PREFIXES = {"ohm": "RrkKMGm", "F": "pnum", "H": "pnum"}


@dataclass(frozen=True)
class Written:
    """A value in the netlist language's own spelling, and a tolerance where one was written with it."""

    value: str
    tolerance: str = ""


def read_people(text: str, unit: str, stated: bool = False) -> Written | None:
    """The value for a canonical unit; None when it cannot be read as one (never a guess).  ``stated``: the unit itself
    must stand there, as a voltage beside a capacitance does."""
    if len(text) > 200:
        return None
    plain = text.strip().replace("\u00a0", " ").replace("\u202f", " ")
    if _GROUPED.search(plain):
        # 4,700 may be 4700 or 4.700
        return None
    plain = re.sub(r"(?<=\d),(?=\d)", ".", plain)
    for there, here in _SPELLINGS:
        plain = there.sub(here, plain)
    plain, tolerance = _spread(plain)
    plain = _FRACTION.sub(lambda m: f"{int(m[1]) / int(m[2]):g}W" if int(m[2]) else "", plain)
    plain = re.sub(r"(?<=\d)\s+(?=[fpnumkKMGT]?(?:ohm|F|H|V|W|A)\b)", "", plain)
    plain = re.sub(r"(?<=\d)\s+(?=[fpnumkKMGTR]\b)", "", plain)
    bare = None
    for word in re.split(r"[\s/;,|@*()_]+", plain):
        found = _one(word, unit)
        if found is None or (stated and not word.endswith(unit)):
            continue
        written = Written(found.value, tolerance or found.tolerance)
        if not word.replace(".", "").isdigit():
            return written
        bare = bare or (written if word not in _SIZES or (plain == word and word[0] != "0") else None)
    return bare


def _spread(text: str) -> tuple[str, str]:
    """The text without its tolerance, and the tolerance as the language writes it."""
    unequal = _UNEQUAL.search(text)
    if unequal is not None:
        high, low = (unequal[1], unequal[2]) if unequal[1] else (unequal[4], unequal[3])
        return _UNEQUAL.sub(" ", text), f"-{low}%..+{high}%"
    found = _TOLERANCE.search(text)
    return _TOLERANCE.sub(" ", text), f"{found[1]}%" if found is not None else ""


def _one(word: str, unit: str) -> Written | None:
    if unit in ("F", "H"):
        # in capitals N, U and P after the digits of a capacitor or inductor are prefixes
        word = re.sub(r"^(\d+(?:\.\d+)?)([NUP])$", lambda m: m[1] + m[2].lower(), word)
    if unit == "V" and re.fullmatch(r"\d+V\d+", word):
        return Written(f"{word.replace('V', '.')}V")
    code = _CODE.match(word)
    if code is not None:
        return _coded(code, unit)
    match = _NUMBER.match(word)
    if match is None:
        return None
    number, tail = match["n"], match["tail"]
    if number.startswith("."):
        number = f"0{number}"
    stated = next((u for u in ("ohm", "F", "H", "V", "W", "A") if tail.endswith(u)), "")
    if stated and stated != unit:
        return None
    prefix = tail.removesuffix(stated) if stated else tail
    if prefix == "R" and unit != "ohm":
        return None
    if unit in ("F", "H") and not tail:
        # a bare "100" on a capacitor may mean picofarads, microfarads or a code: not readable
        return None
    return Written(f"{number}{ {'K': 'k', 'R': ''}.get(prefix, prefix) }{unit}")


def _coded(match: re.Match[str], unit: str) -> Written | None:
    """An IEC 60062 code, with its tolerance letter where one follows."""
    letter = re.sub(r"\d", "", match["code"])
    # behind a resistance F is the tolerance letter, not a unit
    mark = match["tolerance"] or ("F" if unit == "ohm" and match["unit"] == "F" else "")
    stated = match["unit"] if mark != "F" or unit != "ohm" else None
    if letter not in _PREFIXES.get(unit, "") or stated not in (None, unit):
        return None
    return Written(match["code"].replace("r", "R"), f"{_LETTERS[mark]:g}%" if mark else "")
