"""Small helpers on the text of values: what a message may repeat of it."""

from __future__ import annotations

from typing import Protocol

from netaudit.place import Place

#: the longest text that is read as one value; nobody writes a number of a thousand characters
LONGEST = 1000


class Token(Protocol):
    """A piece of text with its place (a word of a statement is one)."""

    @property
    def text(self) -> str: ...

    @property
    def place(self) -> Place: ...


def shown(text: str) -> str:
    """The text in quotes for a message (its own when it has them), cut when it is long."""
    if len(text) > 40:
        return f'"{text[:32]}…" ({len(text)} characters)'
    return text if len(text) > 1 and text[0] == text[-1] == '"' else f'"{text}"'
