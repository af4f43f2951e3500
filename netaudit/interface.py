"""The Python interface: the verbs of the command line on a loaded board."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from netaudit.circuit.circuit import Board
from netaudit.failure import InputError
from netaudit.finding import Finding
from netaudit.workers import IN_PROCESS, Workers

if TYPE_CHECKING:
    from netaudit.audit.records import Audit
    from netaudit.audit.statistics import Plan
    from netaudit.parts.policy import Policy
    from netaudit.solve.point import ModeResult


@dataclass(frozen=True)
class LoadedBoard:
    """A board ready to be linted, solved and audited."""

    board: Board

    @classmethod
    def from_file(cls, path: str, root: str | None = None, changes: Sequence[str] = ()) -> LoadedBoard:
        """Reads a netlist; ``changes`` are ``R1=1k`` settings for every mode."""
        from netaudit.circuit.load import load_board

        return cls(load_board(path, root, changes))

    @classmethod
    def from_text(cls, text: str, name: str = "netlist", changes: Sequence[str] = ()) -> LoadedBoard:
        from netaudit.circuit.load import load_text

        return cls(load_text(text, name, changes))

    @property
    def modes(self) -> tuple[str, ...]:
        """The names of the modes."""
        return tuple(c.mode for c in self.board.circuits)

    def lint(self) -> tuple[Finding, ...]:
        """Structural findings, without solving."""
        from netaudit.audit.lint import lint

        return lint(self.board)

    def solve(self, modes: Sequence[str] = ()) -> tuple[ModeResult, ...]:
        """The operating points of every mode (or of those named) at nominal values."""
        self._known(modes)
        from netaudit.solve.operate import operate

        return tuple(operate(c) for c in self.board.circuits if not modes or c.mode in modes)

    def audit(
        self,
        policy: str | Policy = "none",
        nominal: bool = False,
        modes: Sequence[str] = (),
        plan: Plan | None = None,
        workers: Workers = IN_PROCESS,
    ) -> Audit:
        """Every check at its worst corner (at nominal values only with ``nominal``) in every mode or those named;
        with a ``plan`` of samples also statistics over drawn boards; ``workers`` from ``netaudit.workers``."""
        self._known(modes)
        from netaudit.audit.audit import audit

        return audit(self.board, policy, nominal, modes, plan, workers)

    def _known(self, modes: Sequence[str]) -> None:
        for mode in modes:
            if mode not in self.modes:
                raise InputError(
                    f"{self.board.name}: there is no mode {mode!r}", mend=f"it has {', '.join(self.modes)}"
                )
