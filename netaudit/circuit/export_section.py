"""``[export]`` of a project's ``netaudit.toml`` to ExportSettings: every key checked, each error with its line."""

from __future__ import annotations

import codecs
from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from typing import Any

from netaudit.devices import KINDS
from netaudit.failure import InputError
from netaudit.parts.names import RATINGS
from netaudit.place import Place
from netaudit.project.project import Section
from netaudit.quantities.read import classify
from netaudit.syntax.export_settings import DEFAULTS, ExportSettings, Rule
from netaudit.syntax.suggest import closest

_KEYS = ("columns", "ratings", "letters", "rules", "not-fitted", "encoding")
_GIVEN = ("kind", "part", "state", "value", "fitted")


def export_settings(section: Section | None) -> ExportSettings:
    """The settings of a project.  Raises InputError with the line of whatever is wrong.

    ``columns`` and ``ratings`` add names before the known ones, ``letters`` adds to the known letters and replaces them
    (``"none"`` takes one away), ``not-fitted`` replaces the known marks, ``rules`` are tried in their order.
    """
    if section is None:
        return DEFAULTS
    data = section.data
    if not isinstance(data, Mapping):
        raise InputError("export is a section", place=section.place(), mend="write [export], its keys below")
    for key in data:
        if key not in _KEYS:
            raise _unknown("[export]", key, _KEYS, section.place(key))
    return replace(
        DEFAULTS,
        columns=_names(section, "columns", DEFAULTS.columns),
        ratings=_names(section, "ratings", DEFAULTS.ratings, list(RATINGS)),
        letters=_letters(section),
        rules=_rules(section),
        not_fitted=_texts(data["not-fitted"], "not-fitted", section.place("not-fitted"))
        if "not-fitted" in data
        else DEFAULTS.not_fitted,
        encoding=_encoding(section),
    )


def _unknown(where: str, key: str, known: Sequence[str], place: Place) -> InputError:
    near = closest(key, known)
    mend = f"did you mean {near}?" if near else f"it knows {', '.join(known)}"
    return InputError(f"{where} has no key {key}", place=place, mend=mend)


def _texts(value: object, name: str, place: Place) -> tuple[str, ...]:
    if isinstance(value, str):
        value = [value]
    if not isinstance(value, list) or not all(isinstance(v, str) and v.strip() for v in value):
        raise InputError(
            f"export.{name} = {value!r}"[:100], place=place, mend='it takes a list of texts, such as ["DNP"]'
        )
    return tuple(value)


def _table(section: Section, name: str) -> Mapping[str, Any]:
    table = section.data.get(name, {})
    if not isinstance(table, Mapping):
        raise InputError(f"export.{name} is a section", place=section.place(name), mend=f"write [export.{name}]")
    return table


def _names(
    section: Section, name: str, known: Mapping[str, tuple[str, ...]], others: Sequence[str] = ()
) -> Mapping[str, tuple[str, ...]]:
    """Further names, before the known ones."""
    out = dict(known)
    for key, value in _table(section, name).items():
        place = section.place(name, key)
        if key not in known and key not in others:
            raise _unknown(f"[export.{name}]", key, [*known, *others], place)
        more = _texts(value, f"{name}.{key}", place)
        out[key] = (*more, *out.get(key, ()))
        if key == "designator":
            out["refdes"] = (*more, *out["refdes"])
    return out


def _letters(section: Section) -> Mapping[str, str]:
    out = dict(DEFAULTS.letters)
    for letters, kind in _table(section, "letters").items():
        place = section.place("letters", letters)
        if not letters.isalpha():
            raise InputError(f"export.letters: {letters!r}", place=place, mend="a designator's letters, such as HL")
        if kind == "none":
            out.pop(letters.upper(), None)
        else:
            out[letters.upper()] = _kind(kind, place)
    return out


def _kind(kind: object, place: Place) -> str:
    if isinstance(kind, str) and kind in KINDS:
        return kind
    near = closest(str(kind), list(KINDS))
    mend = f"did you mean {near}?" if near else "netaudit explain lists the kinds"
    raise InputError(f"there is no kind {kind!r}"[:100], place=place, mend=mend)


def _rules(section: Section) -> tuple[Rule, ...]:
    rows = section.data.get("rules", [])
    if not isinstance(rows, list) or not all(isinstance(r, Mapping) for r in rows):
        raise InputError(
            "export.rules is a list of tables", place=section.place("rules"), mend="write [[export.rules]]"
        )
    places = section.text.rows(*section.path, "rules")
    return tuple(_rule(row, places[k] if k < len(places) else {}, section) for k, row in enumerate(rows))


def _rule(row: Mapping[str, Any], places: Mapping[str, Place], section: Section) -> Rule:
    def place(key: str) -> Place:
        return places.get(key) or places.get("") or section.place("rules")

    for key, value in row.items():
        if key not in _GIVEN and key != "when":
            raise _unknown("[[export.rules]]", key, ("when", *_GIVEN), place(key))
        if key == "fitted" and not isinstance(value, bool):
            raise InputError(f"fitted = {value!r}"[:100], place=place(key), mend="it takes true or false")
        if key not in ("when", "fitted") and (not isinstance(value, str) or not value):
            raise InputError(f"{key} = {value!r}"[:100], place=place(key), mend="it takes a text")
    patterns = row.get("when")
    if not isinstance(patterns, Mapping) or not patterns or not all(isinstance(p, str) for p in patterns.values()):
        raise InputError(
            "a rule needs patterns", place=place("when"), mend='such as when = { designator = "D*", value = "GREEN*" }'
        )
    if len(row) == 1:
        raise InputError("a rule that says nothing", place=place(""), mend=f"add one of {', '.join(_GIVEN)}")
    kind = _kind(row["kind"], place("kind")) if "kind" in row else ""
    _state(row, kind, place)
    if "value" in row and classify(row["value"]) != "value":
        raise InputError(f"value = {row['value']!r}"[:100], place=place("value"), mend='such as "10k" or "500mA"')
    return Rule(patterns, kind, row.get("part", ""), row.get("state", ""), row.get("value", ""), row.get("fitted"))


def _state(row: Mapping[str, Any], kind: str, place: Callable[[str], Place]) -> None:
    state = row.get("state")
    if state is None:
        return
    states = {s for name, k in KINDS.items() if not kind or name == kind for s in k.states}
    if state not in states:
        said = f"a {kind} has no state {state!r}" if kind else f"no kind has a state {state!r}"
        near = closest(state, sorted(states))
        mend = f"did you mean {near}?" if near else f"one of {', '.join(sorted(states)) or 'none'}"
        raise InputError(said[:100], place=place("state"), mend=mend)


def _encoding(section: Section) -> str:
    name = section.data.get("encoding", "")
    try:
        # one byte a character: the others are recognised by themselves
        if not isinstance(name, str) or (name and len(bytes(range(32, 127)).decode(name)) != 95):
            raise LookupError
        return codecs.lookup(name).name if name else ""
    except (LookupError, UnicodeError):
        raise InputError(
            f"export.encoding = {name!r}"[:100], place=section.place("encoding"), mend='an 8-bit set such as "cp1251"'
        ) from None
