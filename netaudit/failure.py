"""Wrong input, told apart from an unsafe circuit (a finding) and from a fault of the program (a traceback)."""

from __future__ import annotations

from netaudit.place import Place


class InputError(Exception):
    """A file, netlist or command that cannot be used: where, what is wrong, and what would mend it."""

    def __init__(self, what: str, *, place: Place | None = None, mend: str = "") -> None:
        super().__init__(what)
        self.what = what
        self.place = place
        self.mend = mend

    def __str__(self) -> str:
        """One line: ``file:line:column: what; mend (included from file:line, ...)``, control characters made visible."""
        text = self.what if not self.mend else f"{self.what}; {self.mend}"
        if self.place is not None:
            text = f"{self.place}: {text}"
            for link in reversed(self.place.chain):
                text += f" (included from {link.file}:{link.line})"
        return printable(text)[:1500]


def printable(text: str) -> str:
    """The text on one line with every control character replaced by its escape (a terminal must not obey input)."""
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode("ascii") for c in text)
