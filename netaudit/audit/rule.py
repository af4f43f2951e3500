"""What a rule is: a name, a level, the page that ``explain`` prints, and perhaps a function that finds."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from typing import Literal, TypedDict

from netaudit.circuit.circuit import Board
from netaudit.circuit.graph import Graph
from netaudit.devices.base import Device
from netaudit.finding import Finding, Level

Stage = Literal["structure", "stress", "point", "expect", "fault", "gate"]


@dataclass(frozen=True)
class Site:
    """What a structural rule looks at: the board, the graph of one of its modes, and those of all of them."""

    board: Board
    graph: Graph
    graphs: tuple[Graph, ...]


@dataclass(frozen=True)
class Rule:
    """A rule.  ``find`` is there for structural rules; findings of other stages come from the audit of solved points.

    ``whole``: the rule looks at all modes together and is asked once a board, else it is asked once a mode.
    """

    name: str
    level: Level
    stage: Stage
    summary: str
    find: Callable[[Site], Iterable[Finding]] | None = field(default=None, compare=False)
    whole: bool = False


class About(TypedDict):
    """The fields by which a finding points at a device."""

    device: str
    file: str
    line: int


def about(device: Device) -> About:
    """Where a finding about this device points."""
    return {"device": device.name, "file": device.place.file, "line": device.place.line}


def listed(names: Iterable[str], most: int = 6) -> str:
    """Names for a sentence."""
    every = list(names)
    shown = ", ".join(every[:most])
    return shown if len(every) <= most else f"{shown} and {len(every) - most} more"
