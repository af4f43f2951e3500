"""Tasks of a mode's worst case: a function of solved boards to be maximised, and what to do with its extreme."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from netaudit.audit.worst import Extreme, Objective
from netaudit.devices.base import Device
from netaudit.finding import Finding, Level
from netaudit.solve.solved import Solved

#: called with the extreme and the nominal board; gives findings
Verdict = Callable[[Extreme, Solved], Iterable[Finding]]


@dataclass(frozen=True)
class Task:
    """``objective`` is maximised over the box; ``verdict`` judges what was found."""

    objective: Objective
    verdict: Verdict


def made(
    rule: str, level: Level, device: Device, mode: str, text: str, corner: Mapping[str, float], **fields: Any
) -> Finding:
    """A finding about a device at a corner; ``fields`` are further fields of the record."""
    return Finding(
        rule, level, f"{device.name}: {text}", device=device.name, mode=mode, corner=corner,
        file=device.place.file, line=device.place.line, **fields,
    )  # fmt: skip
