"""netaudit: finds the DC operating points of a netlist and checks every part against its ratings.

>>> import netaudit
>>> board = netaudit.loads('''netlist 1
... ground GND
... PS1 supply 12V +:VIN -:GND
... R1 resistor 1k 1% P_tot=250mW 1:VIN 2:M
... R2 resistor 1k 1% P_tot=250mW 1:M 2:GND
... ''')
>>> board.solve()[0].points[0].nets["M"]
6.0
>>> board.audit().fails()
False
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

__version__ = "0.1.0"

if TYPE_CHECKING:
    from netaudit.interface import LoadedBoard

__all__ = ["__version__", "explain", "load", "loads"]


def load(path: str, root: str | None = None, changes: Sequence[str] = ()) -> LoadedBoard:
    """A netlist from a file, with everything it includes.

    ``root``: nothing outside that folder is read; ``changes``: settings such as ``R1=1k`` that hold in every mode.
    Raises ``netaudit.failure.InputError`` for anything that cannot be used.
    """
    from netaudit.interface import LoadedBoard

    return LoadedBoard.from_file(path, root, changes)


def loads(text: str, name: str = "netlist", changes: Sequence[str] = ()) -> LoadedBoard:
    """A netlist from a text; ``name`` stands for its file in messages."""
    from netaudit.interface import LoadedBoard

    return LoadedBoard.from_text(text, name, changes)


def explain(name: str | None = None) -> str:
    """The page of a rule or a device kind; without a name, the list of both.  Raises ``netaudit.failure.InputError``."""
    from netaudit.report.pages import page

    return page(name)
