"""Why a text is not a number of the unit that is expected: known mistakes, each with what to write instead."""

from __future__ import annotations

import re

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.text import shown
from netaudit.quantities.units import FORMS, PREFIXES, UNITS, measures

_START = re.compile(r"([+-]?[0-9]+(?:\.[0-9]+)?(?:e[+-]?[0-9]+)?)(.*)", re.DOTALL)
#: multipliers and units that people write out, in lower case, and their form in the language
_SPELLED = (
    ("mega", "M"),
    ("meg", "M"),
    ("kilo", "k"),
    ("milli", "m"),
    ("micro", "u"),
    ("nano", "n"),
    ("pico", "p"),
)
_NAMES = (
    ("ohms", "ohm"),
    ("volts", "V"),
    ("volt", "V"),
    ("amps", "A"),
    ("amp", "A"),
    ("ampere", "A"),
    ("watts", "W"),
    ("watt", "W"),
    ("farad", "F"),
    ("henry", "H"),
    ("celsius", "degC"),
    ("deg", "degC"),
    ("kelvin", "K"),
    ("c", "degC"),
)


def explain(text: str, unit: str, place: Place) -> InputError:
    """The error for a text that is not a number of ``unit``."""
    what, mend = _shape(text) or _unit(text, unit)
    return InputError(what, place=place, mend=mend)


def _shape(text: str) -> tuple[str, str] | None:
    """Mistakes of the number itself, whatever its unit."""
    said = shown(text)
    if not text:
        return "a value is missing", "write a number with its unit"
    if text[0] in "−–—":
        return f"{said} starts with a dash that is not a minus sign", "write the ASCII sign -"
    if re.match(r"[+-]?\.[0-9]", text):
        return f"{said} has no digit before its point", "write 0 before it, as in 0.5"
    match = _START.fullmatch(text)
    if match is None:
        return f"{said} is not a number", "write digits, then the unit, as in 4.7kohm"
    number, rest = match.groups()
    if re.match(r"E[+-]?[0-9]", rest):
        return f"{said} has a capital E", f"an exponent is written with a small e: {number}e{rest[1:]}"[:80]
    if rest[:1] == ".":
        return f"{said} has a point without digits on both sides", "write for example 5V or 5.0V"
    if re.match(r",[0-9]", rest):
        return f"{said} has a decimal comma", f"write a point: {number}.{rest[1:]}"[:80]
    if rest[:1].isspace():
        return f"{said} has a blank inside", "write the unit close to the number, as in 12V"
    return None


def _unit(text: str, unit: str) -> tuple[str, str]:
    """Mistakes of the unit."""
    number = re.sub(_START, r"\1", text)
    rest = text[len(number) :]
    wanted = UNITS[unit]
    said = shown(text)
    if not rest or (unit in ("degC", "K") and rest in PREFIXES):
        return f"{said} has no unit", f"{wanted.meaning} needs one, as in {wanted.example}"
    others = measures(rest)
    better = () if others else _respelled(rest, unit)
    if better:
        why = "unit and prefix are case-sensitive (m is milli, M is mega, k is kilo)"
        return f"{said}: {shown(rest)} is not a unit", f"write {' or '.join(number + b for b in better)}; {why}"[:160]
    if unit == "K" and rest in FORMS["degC"]:
        return f"{said} is a temperature where a difference is expected", f"write {number}K"
    if rest.startswith(("degC/", "°C/")) or rest.endswith(("/degC", "/°C")):
        return f"{said}: a difference of temperatures is in K", f"write {number}{re.sub('degC|°C', 'K', rest)}"
    if others:
        return f"{said} is {UNITS[others[0]].meaning} where {wanted.meaning} is expected", f"as in {wanted.example}"
    return f"{said}: {shown(rest)} is not a unit of {wanted.meaning}", f"write it as in {wanted.example}"


def _respelled(rest: str, unit: str) -> list[str]:
    """Forms of the unit that differ from the text in case or spelling only, most likely first."""
    if rest in FORMS[unit]:
        return []
    text = rest.lower()
    for spelled, prefix in _SPELLED:
        if text.startswith(spelled):
            text = prefix.lower() + text[len(spelled) :]
            if prefix == "M":
                tail = _tail(text[1:], unit)
                return [] if tail is None else ["M" + tail]
            break
    for name, form in _NAMES:
        if text.endswith(name) and (form == unit):
            text = text[: len(text) - len(name)] + form.lower()
            break
    forms = [f for f in FORMS[unit] if f.lower() == text and f.isascii()]
    if unit not in ("degC", "K", "1"):
        forms += [p for p in PREFIXES if p.lower() == text and p.isascii()]
    return [f for f in forms if f != rest]


def _tail(text: str, unit: str) -> str | None:
    """The unit after a spelled-out multiplier; empty when the unit is left out; None when it is another."""
    if text in ("", "ohms") or text.lower() == unit.lower():
        return unit if text else ""
    return None
