"""Text to logical lines: continuation joined, comments taken off, control characters refused, places kept."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Iterator
from dataclasses import dataclass

from netaudit.failure import InputError
from netaudit.place import Place

#: characters of one statement, continuation lines included
LONGEST = 200_000


@dataclass(frozen=True, slots=True)
class Piece:
    """A physical line's part of a logical line: where it begins in the joined text."""

    start: int
    line: int
    source: str


@dataclass(frozen=True, slots=True)
class LogicalLine:
    """A statement's text with the pieces that it was joined from."""

    text: str
    pieces: tuple[Piece, ...]
    file: str
    chain: tuple[Place, ...]

    def place(self, start: int, end: int | None = None) -> Place:
        """The place of characters start..end of the joined text."""
        if len(self.pieces) == 1:
            piece = self.pieces[0]
            return Place(self.file, piece.line, start + 1, None if end is None else end + 1, piece.source, self.chain)
        piece = self.pieces[bisect_right(self.pieces, start, key=_start) - 1]
        column = start - piece.start + 1
        stop = None if end is None else min(end - piece.start + 1, len(piece.source) + 1)
        return Place(self.file, piece.line, column, stop, piece.source, self.chain)


def _start(piece: Piece) -> int:
    return piece.start


def logical_lines(text: str, file: str, chain: tuple[Place, ...] = ()) -> Iterator[LogicalLine]:
    """The statements of a text, empty ones left out."""
    joined: str = ""
    pieces: list[Piece] = []
    for number, raw in enumerate(text.split("\n"), start=1):
        source = raw.removesuffix("\r")
        if not pieces and source.isprintable():
            # most lines: nothing to join, nothing to take off
            if not source or source[0] == "#":
                continue
            if "#" not in source and "\\" not in source and len(source) <= LONGEST:
                if not source.isspace():
                    yield LogicalLine(source, (Piece(0, number, source),), file, chain)
                continue
        _no_controls(source, file, number, chain)
        body = _without_comment(source, file, number, chain)
        more = body.rstrip().endswith("\\") and not _inside_quotes(body)
        if more:
            body = body.rstrip()[:-1] + " "
        pieces.append(Piece(len(joined), number, source))
        joined += body
        if len(joined) > LONGEST:
            raise InputError(
                f"a statement of more than {LONGEST} characters", place=Place(file, number, chain=chain), mend="part it"
            )
        if more:
            continue
        if joined.strip():
            yield LogicalLine(joined, tuple(pieces), file, chain)
        joined, pieces = "", []
    if joined.strip():
        raise InputError(
            "the line that is to be continued is the last one",
            place=Place(file, pieces[-1].line, len(pieces[-1].source), None, pieces[-1].source, chain),
            mend="remove the \\ at its end",
        )


def _no_controls(source: str, file: str, number: int, chain: tuple[Place, ...]) -> None:
    if source.isprintable():
        return
    for column, c in enumerate(source, start=1):
        if c != "\t" and (ord(c) < 32 or 127 <= ord(c) < 160 or c in "\u2028\u2029"):
            raise InputError(
                f"a control character (code {ord(c)})",
                place=Place(file, number, column, column + 1, "", chain),
                mend="remove it",
            )


def _without_comment(source: str, file: str, number: int, chain: tuple[Place, ...]) -> str:
    if "#" not in source:
        return source
    quoted, escaped = False, False
    for k, c in enumerate(source):
        if escaped:
            escaped = False
        elif c == "\\" and quoted:
            escaped = True
        elif c == '"':
            quoted = not quoted
        elif c == "#" and not quoted:
            if k and source[k - 1] not in " \t":
                raise InputError(
                    "a # inside a word",
                    place=Place(file, number, k + 1, k + 2, source, chain),
                    mend="put a blank before a comment, or the name in quotes",
                )
            return source[:k]
    return source


def _inside_quotes(body: str) -> bool:
    return body.replace("\\\\", "").replace('\\"', "").count('"') % 2 == 1
