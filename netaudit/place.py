"""Where something stands in a user's file: the address that every error and finding carries."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Place:
    """A spot in an input file.

    ``file`` is the path as the user would name it, ``line`` and ``column`` count from 1, ``end_column`` is one past the
    last character.  ``source`` is the text of that line (for the caret), ``chain`` the places of the include statements
    that led here, outermost first.
    """

    file: str
    line: int
    column: int = 1
    end_column: int | None = None
    source: str = ""
    chain: tuple[Place, ...] = ()

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"

    def caret(self) -> str:
        """The source line with a marker below the place; empty when the line is not known."""
        if not self.source:
            return ""
        pad = "".join("\t" if c == "\t" else " " for c in self.source[: self.column - 1])
        width = max(1, (self.end_column or self.column + 1) - self.column)
        return f"{self.source}\n{pad}{'^' * width}"
