"""Netlist files to statements: decoding, logical lines, includes."""

from __future__ import annotations

import hashlib
import os
from dataclasses import dataclass, field, replace
from pathlib import Path

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.text import shown
from netaudit.syntax.collector import collector_paused
from netaudit.syntax.export import Export
from netaudit.syntax.export_settings import DEFAULTS, ExportSettings
from netaudit.syntax.lines import LogicalLine, logical_lines
from netaudit.syntax.parse import Mark, Parser
from netaudit.syntax.paths import below_root, project_root
from netaudit.syntax.statements import (
    BlockStatement,
    DeviceStatement,
    ExportStatement,
    ModeStatement,
    Netlist,
    PartsStatement,
    Statement,
    Word,
)

LARGEST_FILE = 64 << 20
#: 200,000 parts with a dozen properties each
LARGEST_EXPORT = 128 << 20
#: how a file begins that stands in a repository for a large one (Git LFS specification, pointer file, version 1)
POINTER = b"version https://git-lfs.github.com/spec/v1\n"
_FETCH = "fetch its content first: git lfs pull"
_EXPORTS = (".edf", ".edn", ".edif", ".csv")


@dataclass
class _Reading:
    """What is collected while files are read."""

    root: str
    statements: list[Statement] = field(default_factory=list)
    files: dict[str, str] = field(default_factory=dict)
    only_modes: Place | None = None
    designators: dict[str, Place] = field(default_factory=dict)
    named: dict[tuple[str, str], Place] = field(default_factory=dict)
    settings: ExportSettings = DEFAULTS


def read_netlist(path: str, *, root: str | None = None, settings: ExportSettings = DEFAULTS) -> Netlist:
    """A netlist and all that it includes.  Raises InputError with the place of whatever cannot be used."""
    reading = _Reading(project_root(path, root), settings=settings)
    with collector_paused():
        _read_file(path, reading, None, (os.path.realpath(path),))
    return Netlist(path, reading.root, tuple(reading.statements), reading.only_modes, reading.files)


def read_netlist_text(text: str, name: str = "netlist") -> Netlist:
    """The same for a text that stands nowhere; its includes are looked for from the current folder."""
    reading = _Reading(project_root(name))
    with collector_paused():
        _read_text(text, name, reading, (), ())
    return Netlist(name, reading.root, tuple(reading.statements), reading.only_modes, reading.files)


def _read_file(path: str, reading: _Reading, include: Word | None, above: tuple[str, ...]) -> None:
    """Reads a file, the one that the user named or one that ``include`` names."""
    data = read_bytes(path, path, include.place if include else None)
    chain = (*include.place.chain, replace(include.place, chain=())) if include else ()
    reading.files[path] = hashlib.sha256(data).hexdigest()
    _read_text(decode(data, path, chain), path, reading, chain, above)


def read_bytes(path: str, shown: str, place: Place | None, most: int = LARGEST_FILE) -> bytes:
    """The content of a file; InputError when there is none, it is a folder, or it is too large."""
    named = shown if len(shown) <= 300 else f"{shown[:300]}…"
    try:
        if Path(path).is_dir():
            raise InputError(f"{named} is a folder", place=place, mend="name a file in it")
        with Path(path).open("rb") as file:
            # a device or pipe has no size to ask for
            data = file.read(most + 1)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        mend = "a name is relative to the file that it stands in" if place else "check the name"
        raise InputError(f"{named} cannot be read: {reason}", place=place, mend=mend) from None
    if len(data) > most:
        raise InputError(f"{named} is too large", place=place, mend=f"at most {most >> 20} MiB are read")
    if data.startswith(POINTER):
        raise InputError(f"{named} only points at a large file kept elsewhere", place=place, mend=_FETCH)
    return data


def decode(data: bytes, shown: str, chain: tuple[Place, ...] = ()) -> str:
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data[: error.start].count(b"\n") + 1
        raise InputError("this is not UTF-8", place=Place(shown, line, chain=chain), mend="save it as UTF-8") from None


def _read_text(text: str, file: str, reading: _Reading, chain: tuple[Place, ...], above: tuple[str, ...]) -> None:
    parser = Parser()
    opened: list[tuple[Mark, list[Statement]]] = []
    first = True
    for line in logical_lines(text, file, chain):
        found = parser.parse(line, first=first)
        first = False
        if isinstance(found, Mark):
            _mark(found, line, reading, opened, chain, above)
        else:
            _add(found, line, reading, opened)
    if first:
        raise InputError("the netlist is empty", place=Place(file, 1, chain=chain), mend="begin it with: netlist 1")
    if opened:
        mark = opened[-1][0]
        raise InputError(
            f"{mark.word} {shown(mark.name.text)} that begins here has no end",
            place=mark.place,
            mend="close it with: end",
        )


def _add(found: Statement, line: LogicalLine, reading: _Reading, opened: list[tuple[Mark, list[Statement]]]) -> None:
    if opened:
        opened[-1][1].append(found)
        return
    if isinstance(found, DeviceStatement):
        first = reading.designators.setdefault(found.designator.text, found.place)
        if first is not found.place:
            raise InputError(
                f"designator {found.designator.text} stands twice (first at {first.file}:{first.line})",
                place=found.place,
                mend="rename one of them",
            )
    if isinstance(found, PartsStatement) and found.file.quoted:
        found = replace(found, path=below_root(found.file.text, found.place, reading.root))
    reading.statements.append(found)


def _mark(
    mark: Mark,
    line: LogicalLine,
    reading: _Reading,
    opened: list[tuple[Mark, list[Statement]]],
    chain: tuple[Place, ...],
    above: tuple[str, ...],
) -> None:
    if mark.word in ("mode", "block"):
        if opened:
            outer = opened[-1][0]
            raise InputError(
                f"{mark.word} inside the {outer.word} {shown(outer.name.text)} of line {outer.place.line}",
                place=mark.place,
                mend="close the first with: end",
            )
        _named_once(mark, reading)
        opened.append((mark, []))
    elif mark.word == "end":
        if not opened:
            raise InputError("end without a mode or block before it", place=mark.place, mend="remove it")
        start, body = opened.pop()
        reading.statements.append(_closed(start, body))
    elif opened:
        raise InputError(
            f"{mark.word} inside the {opened[-1][0].word} of line {opened[-1][0].place.line}",
            place=mark.place,
            mend="close it with: end",
        )
    elif mark.word == "only":
        reading.only_modes = mark.place
    elif mark.word == "include":
        _include(mark, reading, chain, above)


def _named_once(mark: Mark, reading: _Reading) -> None:
    """A mode or block of each name stands once."""
    first = reading.named.setdefault((mark.word, mark.name.text), mark.place)
    if first is not mark.place:
        raise InputError(
            f"{mark.word} {shown(mark.name.text)} is defined twice (first at {first.file}:{first.line})",
            place=mark.name.place,
            mend="join the two" if mark.word == "mode" else "rename one of them",
        )


def _include(mark: Mark, reading: _Reading, chain: tuple[Place, ...], above: tuple[str, ...]) -> None:
    path = below_root(mark.name.text, mark.place, reading.root)
    if path.lower().endswith(_EXPORTS):
        reading.statements.append(_export(path, mark, reading))
        return
    resolved = os.path.realpath(path)
    if resolved in above:
        raise InputError(f"{mark.name.text} includes itself", place=mark.name.place, mend="break the cycle")
    if len(above) > 60:
        raise InputError("includes nested more than 60 deep", place=mark.name.place)
    _read_file(path, reading, mark.name, (*above, resolved))


def _export(path: str, mark: Mark, reading: _Reading) -> ExportStatement:
    data = read_bytes(path, path, mark.name.place, LARGEST_EXPORT)
    reading.files[path] = hashlib.sha256(data).hexdigest()
    return ExportStatement(read_export(data, path, reading.settings), mark.place)


def read_export(data: bytes, shown: str, settings: ExportSettings = DEFAULTS) -> Export:
    """An export by the ending of its name: EDIF 2 0 0, or a CSV table."""
    if shown.lower().endswith(".csv"):
        from netaudit.syntax.tables import read_table

        return read_table(data, shown, settings)
    from netaudit.syntax.edif import read_edif

    return read_edif(data, shown, settings)


def _closed(mark: Mark, body: list[Statement]) -> Statement:
    from netaudit.syntax.statements import (
        AmbientStatement,
        CoveredStatement,
        DeviceStatement,
        OmitStatement,
        PlaceStatement,
        SameHeatStatement,
        SetStatement,
    )

    if mark.word == "mode":
        changes = []
        for s in body:
            if not isinstance(s, (SetStatement, OmitStatement, PlaceStatement, AmbientStatement)):
                raise InputError(
                    f"mode {shown(mark.name.text)} of line {mark.place.line}: it holds set, omit, place and ambient only",
                    place=s.place,
                    mend="is the mode's end missing above?",
                )
            changes.append(s)
        return ModeStatement(mark.name, tuple(changes), mark.place)
    for s in body:
        if not isinstance(s, (DeviceStatement, CoveredStatement, SameHeatStatement)):
            raise InputError(
                f"a block holds devices only (block {mark.name.text} of line {mark.place.line})",
                place=s.place,
                mend="is the block's end missing above?",
            )
    return BlockStatement(mark.name, mark.pins, mark.defaults, tuple(body), mark.place)
