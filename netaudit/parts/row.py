"""A row of a part table as read, before anything in it is understood: the same from TOML and from CSV."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from typing import Any, NoReturn, Protocol

from netaudit.failure import InputError
from netaudit.parts.names import PARAMETERS, RATINGS, WORDS, spelling
from netaudit.place import Place
from netaudit.syntax.suggest import closest

#: keys of a row that are neither values nor ratings
OWN_KEYS = frozenset({"kind", "block", "forward", "points", "pins", "spread", "source", "ratings", "generic", "name"})
#: keys that hold a table of their own
GROUPS = frozenset({"pins", "spread", "ratings"})
_GROUP_HINT = {
    "pins": 'write pins = { "1" = "A", "2" = "K" }, in CSV a column pins.1',
    "spread": 'write spread = { V_F = "0.15V" }, in CSV a column spread.V_F',
    "ratings": "write [NAME.ratings] above the ratings, in CSV a column for each",
}


@dataclass(frozen=True)
class Row:
    """``values`` by key, groups (``ratings``, ``spread``, ``pins``) nested; ``locate(*path)`` finds a key's place."""

    name: str
    values: Mapping[str, Any]
    locate: Callable[..., Place]

    @property
    def place(self) -> Place:
        """Where the row begins."""
        return self.locate()

    def fail(self, what: str, *path: str, mend: str = "") -> NoReturn:
        """The InputError of something in this row, at the key that is wrong."""
        raise InputError(f"part {self.name}: {what}", place=self.locate(*path), mend=mend)

    def group(self, *path: str) -> Mapping[str, Any]:
        """A nested table, empty when it is not there."""
        found: Any = self.values
        for key in path:
            found = found.get(key, {})
        if not isinstance(found, Mapping):
            self.fail(f"{'.'.join(path)} holds a table", *path, mend=_GROUP_HINT.get(path[-1], ""))
        return found

    def word(self, *path: str) -> str:
        """A text without meaning as a number: a kind, a source, a pin's terminal.  A number is taken as it is written."""
        value: Any = self.values
        for key in path:
            value = value[key]
        if not isinstance(value, (str, int)) or isinstance(value, bool):
            said = f"{'.'.join(path)} is {described(value)}, not a text"
            self.fail(said, *path, mend='write it in quotes, as in "led"')
        return str(value)


class Rows(Protocol):
    """The rows of one file.  Its syntax has been read; what a row says is looked at when a board asks for it."""

    @property
    def names(self) -> Iterable[str]: ...

    def row(self, name: str) -> Row:
        """The row of that name; InputError for one that is not sound."""

    def place(self, name: str) -> Place:
        """Where the row begins."""


def described(value: object) -> str:
    """What a value of TOML is, for a message."""
    for kinds, said in ((bool, "a truth value"), (Mapping, "a table"), (list, "a list"), ((int, float), "a number")):
        if isinstance(value, kinds):
            return said
    return "a text" if isinstance(value, str) else "a date or time"


def known_key(key: str) -> bool:
    """Whether a row may have this key."""
    return key in OWN_KEYS or key in PARAMETERS or key in RATINGS or key in WORDS


def meant(key: str, ratings_only: bool = False) -> str:
    """The hint for an unknown key: the symbol that was probably meant."""
    names = [*RATINGS] if ratings_only else [*RATINGS, *PARAMETERS, *OWN_KEYS, *WORDS]
    near = spelling(key, names) or closest(key, names)
    return f"did you mean {near}?" if near else "netaudit explain KIND lists the names that a kind knows"
