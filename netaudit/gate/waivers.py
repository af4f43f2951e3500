"""Waiver files: reviewed exceptions, each with its reason.

TOML with ``format = 1`` and a ``[[waiver]]`` for each: ``rule``, ``board``, ``parts`` and ``nets`` (any order), ``mode``
(left out: every mode), ``ratio`` or ``value`` as far as it was waived, ``reason``, ``until``, ``reference``.
"""

from __future__ import annotations

import datetime
import hashlib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from netaudit.audit.rules import RULES
from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.project.globs import named_files
from netaudit.project.project import Project
from netaudit.syntax.reader import decode, read_bytes
from netaudit.syntax.suggest import closest
from netaudit.syntax.toml_text import TomlText, read_toml

FORMAT = 1


@dataclass(frozen=True)
class Waiver:
    """A waiver: what it covers, as far as which ``ratio`` (or ``value`` where a finding has no ratio), why, how long."""

    rule: str
    board: str
    parts: frozenset[str]
    nets: frozenset[str]
    mode: str | None
    ratio: float | None
    value: float | None
    reason: str
    until: datetime.date | None
    reference: str
    place: Place


@dataclass(frozen=True)
class Waivers:
    """All waivers of a project, and the SHA-256 of the files that they stand in."""

    every: tuple[Waiver, ...] = ()
    files: Mapping[str, str] | None = None


_KEYS: Mapping[str, tuple[type, ...]] = {
    "rule": (str,),
    "board": (str,),
    "parts": (list,),
    "nets": (list,),
    "mode": (str,),
    "ratio": (int, float),
    "value": (int, float),
    "reason": (str,),
    "until": (datetime.date, str),
    "reference": (str,),
}
_SAID: Mapping[type, str] = {str: "a text in quotes", list: "a list of texts", float: "a number"}


def read_waivers(project: Project | None) -> Waivers:
    """The waivers that a project names, none without a project.  Raises InputError with the line of what is wrong."""
    if project is None:
        return Waivers()
    found: list[Waiver] = []
    files: dict[str, str] = {}
    for name in named_files(project, "waivers", project.waivers):
        path = project.path(name)
        data = read_bytes(path, path, project.place("waivers"))
        files[path] = hashlib.sha256(data).hexdigest()
        found += _file(read_toml(decode(data, path), path))
    return Waivers(tuple(found), files)


def _file(text: TomlText) -> Sequence[Waiver]:
    _format(text)
    for name in text.data:
        if name not in ("format", "waiver"):
            near = closest(name, ["format", "waiver"])
            mend = f"did you mean {near}?" if near else "it holds format and [[waiver]]"
            raise InputError(f"a waiver file has no {name}", place=text.place(name), mend=mend)
    rows = text.data.get("waiver", [])
    if not isinstance(rows, list) or not all(isinstance(row, dict) for row in rows):
        raise InputError("waiver is a list of tables", place=text.place("waiver"), mend="write [[waiver]]")
    places = text.rows("waiver")
    spots = places if len(places) == len(rows) else ({"": text.place("waiver")},) * len(rows)
    return [_waiver(row, spot) for row, spot in zip(rows, spots, strict=True)]


def _format(text: TomlText) -> None:
    stated = text.data.get("format")
    if stated == FORMAT and not isinstance(stated, bool):
        return
    newer = isinstance(stated, int) and stated > FORMAT
    what = f"waivers in format {stated}" if "format" in text.data else "waivers in an old format (no format is stated)"
    mend = "this netaudit is too old for them" if newer else f"review them, then begin the file with format = {FORMAT}"
    raise InputError(what, place=text.place("format"), mend=mend)


def _waiver(row: Mapping[str, Any], spot: Mapping[str, Place]) -> Waiver:
    for key, value in row.items():
        _key(key, value, spot.get(key, spot[""]))
    for key in ("rule", "board", "reason"):
        if not str(row.get(key, "")).strip():
            raise InputError(f"a waiver without {key}", place=spot[""], mend=f"add {key} = ...")
    rule = row["rule"]
    if rule not in RULES or RULES[rule].stage == "gate":
        near = closest(rule, [name for name in RULES if RULES[name].stage != "gate"])
        mend = f"did you mean {near}?" if near else "netaudit explain lists the rules"
        raise InputError(f"no rule {rule} can be waived", place=spot["rule"] if "rule" in spot else spot[""], mend=mend)
    return Waiver(
        rule,
        row["board"],
        frozenset(row.get("parts", ())),
        frozenset(row.get("nets", ())),
        row.get("mode"),
        row.get("ratio"),
        row.get("value"),
        row["reason"].strip(),
        _date(row.get("until"), spot.get("until", spot[""])),
        row.get("reference", ""),
        spot[""],
    )


def _key(key: str, value: object, place: Place) -> None:
    if key not in _KEYS:
        near = closest(key, _KEYS)
        mend = f"did you mean {near}?" if near else f"it knows {', '.join(_KEYS)}"
        raise InputError(f"a waiver has no key {key}", place=place, mend=mend)
    types = _KEYS[key]
    good = isinstance(value, types) and not isinstance(value, bool)
    if good and isinstance(value, list):
        good = bool(value) and all(isinstance(v, str) and v for v in value)
    if not good:
        said = _SAID.get(types[-1] if key != "until" else str, "a text")
        example = "a date, such as 2031-12-31" if key == "until" else said
        raise InputError(f"waiver: {key} = {value!r}"[:120], place=place, mend=f"it takes {example}")


def _date(value: object, place: Place) -> datetime.date | None:
    if isinstance(value, datetime.datetime):
        return value.date()
    if value is None or isinstance(value, datetime.date):
        return value
    try:
        return datetime.date.fromisoformat(str(value))
    except ValueError:
        raise InputError(f"waiver: until = {value!r}", place=place, mend="write a date such as 2031-12-31") from None
