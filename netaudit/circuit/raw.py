"""Device statements after blocks are opened: plain names and words, not yet turned into quantities."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace

from netaudit.devices.base import Kind
from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.read import classify
from netaudit.syntax.statements import Items, Word


@dataclass(frozen=True)
class Spec:
    """The items of a device by what they are; each at most once.  ``keys`` maps a key to its word as written."""

    value: Word | None = None
    span: Word | None = None
    tolerance: Word | None = None
    state: Word | None = None
    keys: Mapping[str, Word] = field(default_factory=dict)


@dataclass(frozen=True)
class RawDevice:
    """A device by its full name, its kind, what was written, and its pins' nets (None: left open on purpose)."""

    name: str
    kind: Kind
    spec: Spec
    pins: Mapping[str, str | None]
    place: Place
    #: further names of pins: the port names of an export's part
    aliases: Mapping[str, str] = field(default_factory=dict)


def sort_items(name: str, kind: Kind, items: Items) -> Spec:
    """The items of a statement by their kind; InputError for a second one of a kind or a word the kind does not know."""
    spec = Spec(keys={k.key.text: k.value for k in items.keys})
    for word in items.words:
        field_name = _field(name, kind, word)
        if getattr(spec, field_name) is not None:
            raise InputError(
                f"{name}: a second {_said(field_name)}, {word.text!r}", place=word.place, mend="keep one of them"
            )
        spec = replace(spec, **{field_name: word})  # type: ignore[arg-type]  # the name is one of the four words
    if spec.span is not None and spec.tolerance is not None:
        raise InputError(
            f"{name}: a range and a tolerance on one value", place=spec.tolerance.place, mend="keep one of them"
        )
    return spec


def _field(name: str, kind: Kind, word: Word) -> str:
    if word.text in kind.states:
        return "state"
    shape = classify(word.text)
    if shape == "word":
        raise _unknown_word(name, kind, word)
    if kind.value is None:
        raise InputError(f"{name}: a {kind.name} takes no value ({word.text!r})", place=word.place, mend="remove it")
    return {"value": "value", "range": "span", "tolerance": "tolerance"}[shape]


def _said(field_name: str) -> str:
    return "range" if field_name == "span" else field_name


def _unknown_word(name: str, kind: Kind, word: Word) -> InputError:
    from netaudit.syntax.suggest import closest

    options = [*kind.states, *kind.keys]
    near = closest(word.text, options)
    if near is not None:
        mend = f"did you mean {near}{'=...' if near in kind.keys else ''}?"
    elif kind.states:
        mend = f"a {kind.name} can be {' or '.join(kind.states)}"
    else:
        mend = "a value needs digits, a key is written key=value, a pin PIN:NET"
    return InputError(
        f"{name}: {word.text!r} is neither a value nor a state of a {kind.name}", place=word.place, mend=mend
    )


def changed(old: Spec, new: Spec) -> Spec:
    """What ``set`` makes of a device: a new value drops the old range and absolute tolerance, a percentage stays; a new
    range or tolerance takes the place of both; a value ends a state and a state stands beside the old value."""
    value, span, tolerance, state = old.value, old.span, old.tolerance, old.state
    if new.value is not None:
        value, span, state = new.value, None, None
        if tolerance is not None and not tolerance.text.endswith("%"):
            tolerance = None
    if new.span is not None or new.tolerance is not None:
        span, tolerance = new.span, new.tolerance
    if new.state is not None:
        state = new.state
    return Spec(value, span, tolerance, state, {**old.keys, **new.keys})
