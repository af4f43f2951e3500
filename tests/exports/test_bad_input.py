"""Files that cannot be used: one line, no recursion error, in time and memory that grow with the file."""

from __future__ import annotations

import pytest

from netaudit.failure import InputError
from netaudit.syntax.edif import read_edif

HEAD = (
    "(edif b (edifVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0)) (library L (edifLevel 0) (technology)\n"
    " (cell R (cellType GENERIC) (view V (viewType NETLIST) (interface (port &1) (port &2))))\n"
    " (cell T (cellType GENERIC) (view V (viewType NETLIST) (interface) (contents\n"
)
TAIL = "))))\n (design b (cellRef T (libraryRef L))))"
PLACE = "(instance R1 (viewRef V (cellRef R)))"


def contents(inside: str) -> bytes:
    return (HEAD + inside + TAIL).encode()


def deep(word: str, inside: str = "") -> str:
    return f"({word} " * 10_000 + inside + ")" * 10_000


BAD = {
    "one token": (b"(edif " + b"a" * 5_000_000 + b")", 1, "no cell"),
    "one string": (b'(edif "' + b"a" * 5_000_000, 1, "never closed"),
    "brackets alone": (b"(" * 200_000, 1, "never closed"),
    "forms alone": (b"(a " * 100_000, 1, "never closed"),
    "no keyword": (contents("\n()"), 5, "without a keyword"),
    "binary": (bytes(range(256)) * 1000, 3, "text after the end"),
    "nested arrays": (contents("(net " + deep("array", "x 2") + ")"), 4, "array of an array"),
    "nested renames": (contents("(net " + deep("rename", 'x "y"') + ")"), 4, "without an identifier"),
    "array too large": (contents("(net (array N 100000 100000) (joined))"), 4, "members are read"),
    "array of no size": (contents("(net (array N 0) (joined))"), 4, "members are read"),
    "net without a name": (contents("(net)"), 4, "no name"),
    "reference to nothing": (contents("(net N (joined (portRef)))"), 4, "names nothing"),
    "instance not closed": (
        contents("\n(instance R1\n(viewRef V (cellRef R))\n(net N (joined))\n"),
        5,
        r"\(instance that begins",
    ),
    "cell not closed": ((HEAD.replace("&2))))", "&2)))") + TAIL).encode(), 2, r"\(cell that begins"),
    "cut short": (HEAD.encode(), 3, "cut short"),
    "on two nets": (
        contents(
            f"{PLACE} (net A (joined (portRef &1 (instanceRef R1))))\n(net B (joined (portRef &1 (instanceRef R1))))"
        ),
        5,
        "net A and to net B",
    ),
    "bus of other width": (contents(f"{PLACE} (net (array N 3) (joined (portRef &1 (instanceRef R1))))"), 4, "3 wires"),
    "cell not there": (contents("(instance R1 (viewRef V (cellRef X)))"), 4, "which is not there"),
    "library not there": (contents("(instance R1 (viewRef V (cellRef R (libraryRef M))))"), 4, "of library m"),
}


@pytest.mark.parametrize("name", list(BAD))
def test_one_line_with_its_place(name: str) -> None:
    data, line, words = BAD[name]
    with pytest.raises(InputError, match=words) as caught:
        read_edif(data, "b.edf")
    assert caught.value.place is not None
    assert caught.value.place.line == line
    assert len(str(caught.value)) < 400
    assert "\n" not in str(caught.value)


@pytest.mark.parametrize("word", ["net N", "page P", "x", "joined", "userData u"])
def test_ten_thousand_forms_deep(word: str) -> None:
    assert len(read_edif(contents(PLACE + deep(word)), "b.edf").instances) == 1


def test_blocks_in_blocks_that_would_be_a_billion_parts() -> None:
    blocks = "".join(
        f"(cell C{k} (cellType GENERIC) (view V (viewType NETLIST) (interface) (contents"
        + "".join(f"(instance {i} (viewRef V (cellRef {'R' if k == 0 else f'C{k - 1}'})))" for i in "ABCDEFGH")
        + ")))"
        for k in range(60)
    )
    data = (HEAD.replace(" (cell T", f"{blocks} (cell T") + "(instance A (viewRef V (cellRef C59)))" + TAIL).encode()
    with pytest.raises(InputError, match="placed too often"):
        read_edif(data, "b.edf")
