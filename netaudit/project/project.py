"""A project as records: boards, part tables, policy, corners, and what its gate lets pass."""

from __future__ import annotations

import os
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Literal

from netaudit.finding import Level
from netaudit.place import Place
from netaudit.syntax.toml_text import TomlText

FILE_NAME = "netaudit.toml"


@dataclass(frozen=True)
class Corners:
    """``[corners]``: worst case or nominal values, and boards drawn besides (``samples`` 0: none)."""

    values: Literal["worst", "nominal"] = "worst"
    samples: int = 0
    seed: int = 1
    sequence: Literal["sobol", "latin-hypercube", "plain"] = "sobol"
    distribution: Literal["uniform", "normal"] = "uniform"
    together: tuple[tuple[str, ...], ...] = ()


@dataclass(frozen=True)
class Steps:
    """``[gate]``: by how much of itself a finding's ratio may rise against the base (0.05: 5 %); the same for stresses
    inside their limits, where None lists them only."""

    step: float = 0.05
    stress_step: float | None = None


@dataclass(frozen=True)
class Section:
    """A section that another room checks: its content as read, and where each key stands."""

    data: Mapping[str, Any]
    path: tuple[str, ...]
    text: TomlText

    def place(self, *keys: str) -> Place:
        """Where a key of the section stands."""
        return self.text.place(*self.path, *keys)


@dataclass(frozen=True)
class Project:
    """The content of a ``netaudit.toml``.

    ``file`` is its path as shown, ``folder`` the one that holds it (the project's root); ``boards`` and ``parts`` are
    patterns relative to it, the other files paths relative to it.  ``policy`` is a name, or the path of a file from the
    current folder.  ``workers`` 0 stands for as many as there are processors; ``cache`` None for no cache.
    """

    file: str
    folder: str
    sha256: str = ""
    boards: tuple[str, ...] = ()
    parts: tuple[str, ...] = ()
    policy: str = "none"
    fail_on: Level = "error"
    require_complete: bool = False
    waivers: tuple[str, ...] = ()
    workers: int = 1
    cache: str | None = None
    corners: Corners = field(default_factory=Corners)
    gate: Steps = field(default_factory=Steps)
    export: Section | None = None
    text: TomlText | None = None

    def path(self, name: str) -> str:
        """The path of a file that the project names, from the current folder."""
        return os.path.join(os.path.dirname(self.file), name)

    def place(self, *keys: str) -> Place:
        """Where a key stands in the file."""
        return self.text.place(*keys) if self.text is not None else Place(self.file, 1)
