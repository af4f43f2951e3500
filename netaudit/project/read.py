"""``netaudit.toml`` to a Project: every key and every type is checked, and each error has its line."""

from __future__ import annotations

import hashlib
import os
from collections.abc import Callable, Mapping
from dataclasses import replace
from typing import Any

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.project.keys import KEYS, SAID, Key
from netaudit.project.project import FILE_NAME, Corners, Project, Section, Steps
from netaudit.quantities.read import read_number
from netaudit.syntax.reader import decode, read_bytes
from netaudit.syntax.suggest import closest
from netaudit.syntax.toml_text import TomlText, read_toml


def project_at(folder: str) -> Project | None:
    """The project of a root folder; None where no ``netaudit.toml`` stands in it.  Raises InputError for a wrong one."""
    path = os.path.join(_from_here(folder), FILE_NAME)
    # a broken link is an error, not an absent file
    return read_project(path) if os.path.lexists(path) else None


def find_project(folder: str) -> Project | None:
    """The project of the nearest folder upwards that holds a ``netaudit.toml``."""
    here = os.path.realpath(folder)
    while not os.path.lexists(os.path.join(here, FILE_NAME)):
        above = os.path.dirname(here)
        if above == here:
            return None
        here = above
    return project_at(here)


def _from_here(folder: str) -> str:
    """The folder as a user in the current folder would name it: short where it is at or below it."""
    absolute, here = os.path.realpath(folder), os.path.realpath(os.curdir)
    if absolute == here:
        return ""
    return os.path.relpath(absolute, here) if absolute.startswith(here.rstrip(os.sep) + os.sep) else absolute


def read_project(path: str) -> Project:
    """The project that a file states.  Raises InputError with the line of whatever is wrong."""
    data = read_bytes(path, path, None)
    text = read_toml(decode(data, path), path)
    sections = _sections(text)
    top, corners, gate = sections[""], sections["corners"], sections["gate"]
    base = Project(
        path,
        os.path.dirname(path) or os.curdir,
        hashlib.sha256(data).hexdigest(),
        corners=Corners(**corners),
        gate=Steps(**gate),
        export=Section(text.data["export"], ("export",), text) if "export" in text.data else None,
        text=text,
        **top,
    )
    return _policy_beside(base)


def _policy_beside(project: Project) -> Project:
    """A policy's file is named from the project's folder."""
    if not project.policy.endswith(".toml"):
        return project
    return replace(project, policy=project.path(project.policy))


def _sections(text: TomlText) -> dict[str, dict[str, Any]]:
    """Checked values by section, by the names of the records' fields."""
    out: dict[str, dict[str, Any]] = {section: {} for section in KEYS}
    for name, value in text.data.items():
        if name in KEYS and name:
            if not isinstance(value, Mapping):
                raise InputError(f"{name} is a section", place=text.place(name), mend=f"write [{name}], its keys below")
            if "" not in KEYS[name]:
                for key, inner in value.items():
                    out[name][_field(key)] = _checked(text, (name, key), inner)
        else:
            out[""][_field(name)] = _checked(text, (name,), value)
    return out


def _field(key: str) -> str:
    return key.replace("-", "_")


def _checked(text: TomlText, path: tuple[str, ...], value: object) -> Any:
    section, name = (path[0], path[1]) if len(path) == 2 else ("", path[0])
    key = KEYS[section].get(name)
    if key is None:
        raise _unknown(text, path, section, name)
    read = _READERS[key.shape](value, key)
    if read is None:
        choices = f"{', '.join(key.choices[:-1])} or {key.choices[-1]}" if key.choices else SAID[key.shape]
        if key.shape == "count":
            choices = f"{choices} from {key.least} to {key.most}"
        raise InputError(f"{'.'.join(path)} = {_shown(value)}", place=text.place(*path), mend=f"it takes {choices}")
    return read


def _unknown(text: TomlText, path: tuple[str, ...], section: str, name: str) -> InputError:
    where = f"[{section}]" if section else FILE_NAME
    near = closest(name, [*KEYS[section], *(s for s in KEYS if s and not section)])
    elsewhere = next((s for s, keys in KEYS.items() if name in keys), None)
    if elsewhere is not None:
        mend = f"it belongs below [{elsewhere}]" if elsewhere else "it stands at the top, before the first [section]"
    elif near is not None:
        mend = f"did you mean {near}?"
    else:
        mend = f"it knows {', '.join(KEYS[section])}"
    return InputError(f"{where} has no key {name}", place=text.place(*path), mend=mend)


def _shown(value: object) -> str:
    said = "true" if value is True else "false" if value is False else repr(value)
    return said if len(said) <= 60 else f"{said[:60]}…"


def _text(value: object, key: Key) -> str | None:
    return value if isinstance(value, str) and value else None


def _choice(value: object, key: Key) -> str | None:
    return value if isinstance(value, str) and value in key.choices else None


def _texts(value: object, key: Key) -> tuple[str, ...] | None:
    good = isinstance(value, list) and all(isinstance(v, str) and v for v in value)
    return tuple(value) if good else None  # type: ignore[arg-type]  # checked on the line above


def _groups(value: object, key: Key) -> tuple[tuple[str, ...], ...] | None:
    groups = [_texts(v, key) for v in value] if isinstance(value, list) else [None]
    return None if None in groups else tuple(g for g in groups if g is not None)


def _flag(value: object, key: Key) -> bool | None:
    return value if isinstance(value, bool) else None


def _count(value: object, key: Key) -> int | None:
    # 2.0 is a whole number too, as JSON Schema has it
    whole = isinstance(value, int) or (isinstance(value, float) and value.is_integer())
    good = whole and not isinstance(value, bool) and key.least <= value <= key.most  # type: ignore[operator]  # a number
    return int(value) if good else None  # type: ignore[call-overload]  # checked above


def _share(value: object, key: Key) -> float | None:
    if isinstance(value, str):
        try:
            value = read_number(value, "1", Place(FILE_NAME, 1)) if value.endswith("%") else None
        except InputError:
            return None
    good = isinstance(value, (int, float)) and not isinstance(value, bool) and 0 <= value <= 10
    return float(value) if good else None  # type: ignore[arg-type]  # checked on the line above


_READERS: Mapping[str, Callable[[object, Key], Any]] = {
    "text": _text,
    "choice": _choice,
    "texts": _texts,
    "groups": _groups,
    "flag": _flag,
    "count": _count,
    "share": _share,
}
