"""The statements of a netlist as frozen records with places; nothing here knows what a resistor is."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from netaudit.place import Place
from netaudit.syntax.export import Export


@dataclass(frozen=True, slots=True)
class Word:
    """One token of a statement: its text without quotes, whether it stood in quotes, and where."""

    text: str
    place: Place
    quoted: bool = False


@dataclass(frozen=True, slots=True)
class KeyItem:
    """``key=value``; the value is kept as written until the kind has said what it measures."""

    key: Word
    value: Word


@dataclass(frozen=True, slots=True)
class PinItem:
    """``PIN:NET``; ``open`` for a bare ``nc`` (left unconnected on purpose)."""

    pin: Word
    net: Word

    @property
    def open(self) -> bool:
        return self.net.text == "nc" and not self.net.quoted


@dataclass(frozen=True, slots=True)
class Items:
    """What may follow a kind: bare words (value, state, range, tolerance), keys and pins, each in the order written."""

    words: tuple[Word, ...] = ()
    keys: tuple[KeyItem, ...] = ()
    pins: tuple[PinItem, ...] = ()


@dataclass(frozen=True, slots=True)
class DeviceStatement:
    """``DESIGNATOR KIND items``; the kind may be a block's name."""

    designator: Word
    kind: Word
    items: Items
    place: Place


@dataclass(frozen=True, slots=True)
class TitleStatement:
    text: Word
    place: Place


@dataclass(frozen=True, slots=True)
class PartsStatement:
    """``parts "file"`` or ``parts common`` (``file.quoted`` is False then)."""

    file: Word
    path: str
    place: Place


@dataclass(frozen=True, slots=True)
class GroundStatement:
    net: Word
    place: Place


@dataclass(frozen=True, slots=True)
class AmbientStatement:
    """``ambient T [low..high]``: one or two words."""

    words: tuple[Word, ...]
    place: Place


@dataclass(frozen=True, slots=True)
class OmitStatement:
    designators: tuple[Word, ...]
    place: Place


@dataclass(frozen=True, slots=True)
class PlaceStatement:
    designators: tuple[Word, ...]
    place: Place


@dataclass(frozen=True, slots=True)
class SetStatement:
    """``set DESIGNATOR items``: pins are not allowed among the items."""

    designator: Word
    items: Items
    place: Place


@dataclass(frozen=True, slots=True)
class ExpectStatement:
    """``expect QUANTITY target [target] low..high [mode "…"]``.

    ``quantity`` is voltage, current, power or temperature; ``targets`` are nets for a voltage, else one designator or
    ``DESIGNATOR:PIN`` (``pin`` holds the pin then); ``span`` is the text of the range, one-sided allowed.
    """

    quantity: Word
    targets: tuple[Word, ...]
    pin: Word | None
    span: Word
    mode: Word | None
    place: Place


@dataclass(frozen=True, slots=True)
class SameHeatStatement:
    designators: tuple[Word, ...]
    R_th: Word
    place: Place


@dataclass(frozen=True, slots=True)
class Draw:
    """``PIN:PIN=value``: a current that the covered part draws from the first pin to the second."""

    source: Word
    sink: Word
    value: Word


@dataclass(frozen=True, slots=True)
class CoveredStatement:
    """``covered DESIGNATOR "why" no-current`` (no draws) or ``… draws PIN:PIN=value …``."""

    designator: Word
    reason: Word
    draws: tuple[Draw, ...]
    place: Place


ChangeStatement = SetStatement | OmitStatement | PlaceStatement | AmbientStatement


@dataclass(frozen=True, slots=True)
class ModeStatement:
    name: Word
    changes: tuple[ChangeStatement, ...]
    place: Place


@dataclass(frozen=True, slots=True)
class BlockStatement:
    """``block NAME PIN … [key=default …]`` … ``end``; ``$key`` in the body stands as written in the items' texts."""

    name: Word
    pins: tuple[Word, ...]
    defaults: tuple[KeyItem, ...]
    body: tuple[Statement, ...]
    place: Place


@dataclass(frozen=True, slots=True)
class ExportStatement:
    """``include`` of a schematic export: its content, flat."""

    export: Export
    place: Place


Statement = (
    DeviceStatement
    | ExportStatement
    | TitleStatement
    | PartsStatement
    | GroundStatement
    | AmbientStatement
    | OmitStatement
    | PlaceStatement
    | SetStatement
    | ExpectStatement
    | SameHeatStatement
    | CoveredStatement
    | ModeStatement
    | BlockStatement
)


@dataclass(frozen=True)
class Netlist:
    """A file and all that it includes, in the order of reading.

    ``name`` is the path as the user wrote it; ``files`` maps every file read (netlists, later part tables) to the
    SHA-256 of its content, ``root`` is the folder below which included files must stay; ``only_modes`` is the place of
    that statement, None without it.
    """

    name: str
    root: str
    statements: tuple[Statement, ...]
    only_modes: Place | None = None
    files: Mapping[str, str] = field(default_factory=dict)
