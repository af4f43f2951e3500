"""From a file to a Board."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from netaudit.circuit.circuit import Board
from netaudit.circuit.elaborate import elaborate
from netaudit.circuit.export_section import export_settings
from netaudit.failure import InputError
from netaudit.parts.tables import PartTable, read_table
from netaudit.place import Place
from netaudit.project.globs import named_files
from netaudit.project.project import Project
from netaudit.project.read import project_at
from netaudit.syntax.collector import collector_paused
from netaudit.syntax.lines import logical_lines
from netaudit.syntax.parse import Parser
from netaudit.syntax.paths import project_root
from netaudit.syntax.reader import read_netlist, read_netlist_text
from netaudit.syntax.statements import ModeStatement, Netlist, SetStatement


def load_board(path: str, root: str | None = None, changes: Sequence[str] = ()) -> Board:
    """Reads a netlist with everything it includes.  Raises InputError for anything that cannot be used.

    ``changes`` are settings such as ``R1=1k`` or ``S1=open`` that hold in every mode, after the modes' own.  A
    ``netaudit.toml`` at the project's root adds its part tables.
    """
    with collector_paused():
        project = project_at(project_root(path, root))
        if project is None:
            return elaborate(with_changes(read_netlist(path, root=root), changes))
        settings = export_settings(project.export)
        netlist = with_changes(read_netlist(path, root=root, settings=settings), changes)
        board = elaborate(netlist, project_table(project), settings)
        return replace(board, files={**board.files, project.file: project.sha256})


def project_table(project: Project) -> PartTable:
    """The part tables that every board of a project reads before its own."""
    table = PartTable()
    for name in named_files(project, "parts", project.parts):
        table = table.merge(read_table(project.path(name), place=project.place("parts")))
    return table


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
