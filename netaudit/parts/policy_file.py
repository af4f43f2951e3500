"""A user's derating policy: TOML, ``[kind]``, ``[part]`` or ``[all]`` tables of ``symbol = "75%"``, on a ``base``."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from netaudit.failure import InputError
from netaudit.parts.names import MODEL_DATA, RATINGS
from netaudit.parts.policy import Policy, Row, load_policy
from netaudit.parts.row import meant
from netaudit.parts.values import listed
from netaudit.place import Place
from netaudit.quantities.read import read_number
from netaudit.syntax.toml_text import TomlText, read_toml

#: what no check compares: a policy cannot share it out
_UNCHECKED = MODEL_DATA | {"T_ref", "R_th_ja", "R_th_jc", "I_ZK"}
_EXAMPLE = 'as in [resistor], then P_tot = "60%"'


def policy_files(name: str) -> tuple[str, ...]:
    """The files that a policy is read from: its own, and those that it is based on."""
    found: list[str] = []
    while name.endswith(".toml") and name not in found:
        found.append(name)
        try:
            name = str(tomllib.loads(Path(name).read_text(encoding="utf-8-sig")).get("base", ""))
        except (OSError, ValueError, RecursionError):
            break
    return tuple(found)


def read_policy(path: str) -> Policy:
    """The policy of a file.  Raises InputError with the place of the key that is wrong."""
    files = policy_files(path)
    text = _read(path)
    base_name = text.data.get("base", "none")
    if not isinstance(base_name, str):
        raise InputError("base names a policy", place=text.place("base"), mend='as in base = "cautious"')
    if base_name in files:
        raise InputError(
            f"the policy {base_name} is based on itself", place=text.place("base"), mend="name another base"
        )
    try:
        base = load_policy(base_name)
    except InputError as error:
        raise InputError(error.what, place=error.place or text.place("base"), mend=error.mend) from None
    rows = dict(base.rows)
    for owner, symbol, entry, where in _entries(text):
        place = text.place(*where)
        if (symbol not in RATINGS and symbol != "value") or symbol in _UNCHECKED:
            mend = "no check compares it: use a rating such as P_tot" if symbol in _UNCHECKED else meant(symbol, True)
            raise InputError(f"policy: unknown rating {symbol}", place=place, mend=mend)
        rows[(owner, symbol)] = _row(symbol, entry, path, place)
    return Policy(Path(path).stem, rows)


def _read(path: str) -> TomlText:
    try:
        return read_toml(Path(path).read_bytes().decode("utf-8-sig"), path)
    except UnicodeDecodeError:
        raise InputError("the policy is not UTF-8", place=Place(path, 1), mend="save it as UTF-8") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "that is no file name"
        raise InputError(f"the policy {path} cannot be read: {reason}", mend="check the name") from None


def _entries(text: TomlText) -> Iterator[tuple[str, str, Any, tuple[str, ...]]]:
    """(owner, symbol, entry, path); the owner of ``[all]`` and of entries above any table is empty."""
    for key, value in text.data.items():
        if key == "base":
            continue
        if isinstance(value, dict):
            for symbol, entry in value.items():
                yield "" if key == "all" else key, symbol, entry, (key, symbol)
        else:
            yield "", key, value, (key,)


def _row(symbol: str, entry: Any, path: str, place: Place) -> Row:
    """``"75%"``, ``0.75``, ``"95degC"`` (a cap), ``"T_j - 40K"`` (an offset), or a list of them."""
    row = Row(document=path)
    try:
        for text in listed(entry, place):
            row = _item(symbol, text, row, path, place)
    except InputError as error:
        raise InputError(f"policy: {symbol}: {error.what}", place=place, mend=error.mend or _EXAMPLE) from None
    return row


def _item(symbol: str, text: str, row: Row, path: str, place: Place) -> Row:
    hot = symbol in RATINGS and RATINGS[symbol].unit == "degC"
    offset = re.fullmatch(r"([A-Za-z_]+)\s*-\s*(\S+)", text)
    cap = text.endswith(("degC", "°C"))
    if (offset or cap) and not hot:
        raise InputError(f"{text} is for temperatures", place=place, mend='write a share, as in "75%"')
    if offset:
        kelvin = read_number(offset[2], "K", place)
        if offset[1] != symbol or kelvin < 0:
            raise InputError(f"{text} is no offset", place=place, mend=f'write "{symbol} - 40K"')
        return Row(row.factor, row.cap, kelvin, path)
    if cap:
        return Row(row.factor, read_number(text, "degC", place), row.offset, path)
    factor = read_number(text, "1", place)
    if not 0 < factor <= 1:
        raise InputError(f"a share of {text}", place=place, mend="it lies between 0 and 100 %")
    return Row(factor, row.cap, row.offset, path)
