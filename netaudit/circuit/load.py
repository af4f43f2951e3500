"""From a file to a Board."""

from __future__ import annotations

from netaudit.circuit.circuit import Board
from netaudit.circuit.elaborate import elaborate
from netaudit.syntax.reader import read_netlist, read_netlist_text


def load_board(path: str, root: str | None = None) -> Board:
    """Reads a netlist with everything it includes.  Raises InputError for anything that cannot be used."""
    return elaborate(read_netlist(path, root=root))


def load_text(text: str, name: str = "netlist") -> Board:
    """The same for a text (includes and part tables are looked for below the current folder)."""
    return elaborate(read_netlist_text(text, name))
