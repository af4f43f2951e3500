"""Audits as plain values and back, for the cache and for worker processes.

A record becomes the list of its fields' values, read back by the fields' types; no code comes out of a cache that somebody
else may have written.  What only the solver needs is left out: devices of circuits, and points, which are counted.
"""

from __future__ import annotations

import types
from collections.abc import Callable, Mapping
from dataclasses import fields, is_dataclass, replace
from functools import cache
from typing import Any, Literal, Union, get_args, get_origin, get_type_hints

import netaudit.audit.statistics as statistics
from netaudit.audit.records import Audit
from netaudit.audit.worst import Proof
from netaudit.circuit.circuit import Circuit
from netaudit.solve.point import ModeResult, Point

Builder = Callable[[Any], Any]
#: names that the records import for type checking only
_NAMES = {**vars(statistics), "Proof": Proof, "ModeResult": ModeResult}
_PLAIN = (str, int, float, bool, type(None))


def to_plain(audit: Audit) -> Any:
    """Lists, mappings and scalars that hold what reports and comparisons need of an audit."""
    board = replace(audit.board, circuits=tuple(_outline(c) for c in audit.board.circuits), findings=())
    results = tuple(replace(r, circuit=_outline(r.circuit)) for r in audit.results)
    return _plain(replace(audit, board=board, results=results))


def from_plain(data: Any) -> Audit:
    """The audit again.  Raises TypeError, ValueError, KeyError or IndexError for what ``to_plain`` did not make."""
    found: Audit = _builder(Audit)(data)
    return found


def renamed(data: Any, shown: Callable[[str], str]) -> Any:
    """Plain values with every text, those of keys as well, as it is to be shown."""
    if isinstance(data, str):
        return shown(data)
    if isinstance(data, dict):
        return {shown(key): renamed(v, shown) for key, v in data.items()}
    return [renamed(v, shown) for v in data] if isinstance(data, list) else data


def _outline(circuit: Circuit) -> Circuit:
    return Circuit(circuit.mode, (), (), circuit.grounds, circuit.ambient)


def _plain(value: Any) -> Any:
    if isinstance(value, Point):
        return None
    if isinstance(value, _PLAIN):
        return value
    if isinstance(value, Mapping):
        return {key: _plain(v) for key, v in value.items()}
    if isinstance(value, (tuple, list, frozenset)):
        return [_plain(v) for v in value]
    if is_dataclass(value):
        return [_plain(getattr(value, f.name)) for f in fields(value) if f.init]
    # a number of an array
    return _plain(value.item())


@cache
def _builder(hint: Any) -> Builder:
    """What turns plain values into a type."""
    origin, arguments = get_origin(hint), get_args(hint)
    if hint is Point or hint in _PLAIN or origin is Literal:
        return _same
    if is_dataclass(hint):
        return _record(hint)
    if origin in (Union, types.UnionType):
        inner = [a for a in arguments if a is not type(None)]
        return _optional(_builder(inner[0])) if len(inner) == 1 else _same
    if origin is tuple and arguments[-1] is not Ellipsis:
        builders = [_builder(a) for a in arguments]
        return lambda data: tuple(b(v) for b, v in zip(builders, data, strict=True))
    if origin in (tuple, frozenset):
        return _several(origin, _builder(arguments[0]))
    if origin is not None and issubclass(origin, Mapping):
        build = _builder(arguments[1])
        return dict if build is _same else lambda data: {key: build(v) for key, v in data.items()}
    raise TypeError(f"nothing is known of the type {hint}")


def _same(data: Any) -> Any:
    return data


def _optional(build: Builder) -> Builder:
    return build if build is _same else lambda data: None if data is None else build(data)


def _several(make: Callable[[Any], Any], build: Builder) -> Builder:
    return make if build is _same else lambda data: make([build(v) for v in data])


def _record(cls: Any) -> Builder:
    """Builders of the fields are looked for when they are first needed: records may hold themselves."""
    names = [f.name for f in fields(cls) if f.init]
    builders: list[Builder] = []

    def build(data: Any) -> Any:
        if not builders:
            hints = get_type_hints(cls, localns=_NAMES)
            builders.extend(_builder(hints[name]) for name in names)
        return cls(*[v if b is _same else b(v) for b, v in zip(builders, data, strict=True)])

    return build
