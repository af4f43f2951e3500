"""From a file to a Board."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from netaudit.circuit.circuit import Board
from netaudit.circuit.elaborate import elaborate
from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.collector import collector_paused
from netaudit.syntax.lines import logical_lines
from netaudit.syntax.parse import Parser
from netaudit.syntax.reader import read_netlist, read_netlist_text
from netaudit.syntax.statements import ModeStatement, Netlist, SetStatement


def load_board(path: str, root: str | None = None, changes: Sequence[str] = ()) -> Board:
    """Reads a netlist with everything it includes.  Raises InputError for anything that cannot be used.

    ``changes`` are settings such as ``R1=1k`` or ``S1=open`` that hold in every mode, after the modes' own.
    """
    with collector_paused():
        return elaborate(with_changes(read_netlist(path, root=root), changes))


def load_text(text: str, name: str = "netlist", changes: Sequence[str] = ()) -> Board:
    """The same for a text (includes and part tables are looked for below the current folder)."""
    return elaborate(with_changes(read_netlist_text(text, name), changes))


def with_changes(netlist: Netlist, changes: Sequence[str]) -> Netlist:
    """The netlist with ``DESIGNATOR=value`` settings at the top level and at the end of every mode."""
    if not changes:
        return netlist
    sets = tuple(_setting(change) for change in changes)
    statements = tuple(
        replace(s, changes=(*s.changes, *sets)) if isinstance(s, ModeStatement) else s for s in netlist.statements
    )
    return replace(netlist, statements=(*statements, *sets))


def _setting(change: str) -> SetStatement:
    name, equals, value = change.partition("=")
    if not equals or not name or not value:
        raise InputError(f"--set {change}", mend="write --set R1=1k")
    line = next(logical_lines(f"set {name} {value}", "--set"))
    try:
        found = Parser().parse(line, first=False)
    except InputError as error:
        raise InputError(f"--set {change}: {error.what}", mend=error.mend) from None
    assert isinstance(found, SetStatement)
    return replace(found, place=Place("--set", 1))
