"""Finds the grammars: inside the package (a wheel), else beside it (a checkout)."""

from __future__ import annotations

from functools import cache
from pathlib import Path


@cache
def grammar_text(name: str) -> str:
    """The text of ``grammar/NAME``."""
    package = Path(__file__).resolve().parent.parent
    for folder in (package / "grammar", package.parent / "grammar"):
        path = folder / name
        if path.is_file():
            return path.read_text(encoding="utf-8")
    raise FileNotFoundError(f"grammar {name} is missing from this installation")
