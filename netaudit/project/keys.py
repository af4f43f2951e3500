"""The keys of ``netaudit.toml``: what each takes and what it means.  The reader and the JSON Schema are made from this."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, Literal

from netaudit.finding import LEVELS

Shape = Literal["text", "choice", "texts", "groups", "flag", "count", "share", "open"]


@dataclass(frozen=True)
class Key:
    """A key: the shape of its value, the words it may be, the least and largest number, and a sentence."""

    shape: Shape
    text: str
    choices: tuple[str, ...] = ()
    least: int = 0
    most: int = 0


SAID: Mapping[Shape, str] = {
    "text": 'a text in quotes, such as "boards/main.netlist"',
    "choice": "one of the words that it knows",
    "texts": 'a list of texts, such as ["boards/*.netlist"]',
    "groups": 'a list of lists of texts, such as [["R1", "R2"]]',
    "flag": "true or false",
    "count": "a whole number",
    "share": 'a share, such as "5%" or 0.05',
    "open": "a section",
}

KEYS: Mapping[str, Mapping[str, Key]] = {
    "": {
        "boards": Key("texts", 'patterns of the netlists; ** stands for folders, a leading "!" takes out again'),
        "parts": Key("texts", "part tables that every board reads before its own; a later row of a name wins"),
        "policy": Key("text", "share of each rating that may be used: a shipped policy or a .toml file"),
        "fail-on": Key("choice", "exit status 1 at this level or above", LEVELS),
        "require-complete": Key("flag", "fail when something could not be audited"),
        "waivers": Key("texts", "files with reviewed waivers"),
        "workers": Key("count", "boards at a time; 0 takes every processor", least=0, most=256),
        "cache": Key("text", "folder that keeps the audits of boards that have not changed"),
    },
    "corners": {
        "values": Key("choice", "worst case over all ranges, or nominal values", ("worst", "nominal")),
        "samples": Key("count", "boards to draw for statistics; 0 draws none", least=0, most=10_000_000),
        "seed": Key("count", "the same seed draws the same boards", least=0, most=2**31),
        "sequence": Key("choice", "how the drawn boards are spread", ("sobol", "latin-hypercube", "plain")),
        "distribution": Key("choice", "of values inside their ranges", ("uniform", "normal")),
        "together": Key("groups", "values that move together, as corners name them"),
    },
    "gate": {
        "step": Key("share", "by how much of itself a finding's ratio may rise against the base"),
        "stress-step": Key("share", "the same for stresses inside their limits; left out, they are only listed"),
    },
    "export": {"": Key("open", "how parts of schematic exports are read")},
}

_SCHEMAS: Mapping[Shape, Mapping[str, Any]] = {
    "text": {"type": "string", "minLength": 1},
    "choice": {"type": "string"},
    "texts": {"type": "array", "items": {"type": "string", "minLength": 1}},
    "groups": {"type": "array", "items": {"type": "array", "items": {"type": "string", "minLength": 1}}},
    "flag": {"type": "boolean"},
    "count": {"type": "integer"},
    "share": {
        "oneOf": [
            {"type": "number", "minimum": 0, "maximum": 10},
            {"type": "string", "pattern": "^[0-9]+(\\.[0-9]+)?%$"},
        ]
    },
    "open": {"type": "object"},
}
_WORDS = {"oneOf": [{"type": "string", "minLength": 1}, {"type": "array", "items": {"type": "string", "minLength": 1}}]}
_BY_NAME = {"type": "object", "additionalProperties": _WORDS}
#: keys of a mapping rule of ``[export]``, which the room of the circuits reads
_RULE: Mapping[str, Any] = {
    "when": {"type": "object", "minProperties": 1, "additionalProperties": {"type": "string"}},
    "kind": _SCHEMAS["text"],
    "part": _SCHEMAS["text"],
    "state": _SCHEMAS["text"],
    "value": _SCHEMAS["text"],
    "fitted": {"type": "boolean"},
}
#: sections that another room reads, for the JSON Schema
OPEN: Mapping[str, Mapping[str, Any]] = {
    "export": {
        "columns": {**_BY_NAME, "description": "further column and property names, by what they hold"},
        "ratings": {**_BY_NAME, "description": "further property names, by the rating that they hold"},
        "letters": {
            "type": "object",
            "additionalProperties": _SCHEMAS["text"],
            "description": "kinds by designator letters; none takes one away",
        },
        "rules": {
            "type": "array",
            "items": {
                "type": "object",
                "additionalProperties": False,
                "required": ["when"],
                "minProperties": 2,
                "properties": _RULE,
            },
            "description": "patterns of designator, value, part number or a property, and what such a part is",
        },
        "not-fitted": {**_WORDS, "description": "marks of parts that are not fitted, instead of the known ones"},
        "encoding": {**_SCHEMAS["text"], "description": "8-bit character set of exports that are not UTF-8"},
    }
}


def schema() -> dict[str, Any]:
    """The JSON Schema (draft 2020-12) of ``netaudit.toml``, as shipped in ``netaudit.schema.json``."""
    properties: dict[str, Any] = {name: _schema_of(key) for name, key in KEYS[""].items()}
    for section, keys in KEYS.items():
        if section and "" in keys:
            properties[section] = {**_schema_of(keys[""]), **_table(dict(OPEN[section]))}
        elif section:
            properties[section] = _table({name: _schema_of(key) for name, key in keys.items()})
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "netaudit.toml",
        **_table(properties),
    }


def _table(properties: dict[str, Any]) -> dict[str, Any]:
    return {"type": "object", "additionalProperties": False, "properties": properties}


def _schema_of(key: Key) -> dict[str, Any]:
    out = {**_SCHEMAS[key.shape], "description": key.text}
    if key.choices:
        out["enum"] = list(key.choices)
    if key.shape == "count":
        out |= {"minimum": key.least, "maximum": key.most}
    return out
