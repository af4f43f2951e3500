"""Tasks of a mode's worst case: a function of solved boards to be maximised, and what to do with its extreme."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

from netaudit.audit.worst import Extreme, Objective
from netaudit.finding import Finding
from netaudit.solve.solved import Solved

#: called with the extreme and the nominal board; gives findings
Verdict = Callable[[Extreme, Solved], Iterable[Finding]]


@dataclass(frozen=True)
class Task:
    """``objective`` is maximised over the box; ``verdict`` judges what was found."""

    objective: Objective
    verdict: Verdict
