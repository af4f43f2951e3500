"""Random circuits through an EDIF file, the reader and ``convert``: the same circuit each time, whatever its names."""

from __future__ import annotations

from hypothesis import given, settings
from hypothesis import strategies as st

import netaudit
from netaudit.circuit.circuit import Board
from netaudit.circuit.elaborate import elaborate
from netaudit.circuit.mapping import map_export
from netaudit.parts.tables import PartTable
from netaudit.place import Place
from netaudit.report.netlist_text import netlist_text
from netaudit.syntax.edif import read_edif
from netaudit.syntax.reader import read_netlist_text
from netaudit.syntax.statements import ExportStatement
from tests.exports.writer import Habits, Placed, edif

#: printable characters of ASCII and of other alphabets
_NAMES = st.text(
    st.one_of(st.characters(min_codepoint=32, max_codepoint=126), st.sampled_from("äßµΩкОмéⅢ漢")),
    min_size=1,
    max_size=12,
).filter(lambda name: name.strip() == name)
_VALUES = {"R": ["10k", "4k7", "100", "0R", "2.2 MOhm 1%"], "C": ["100n", "10uF/16V"], "L": ["10uH"], "U": [""]}


@st.composite
def circuits(draw: st.DrawFn) -> list[Placed]:
    nets = draw(st.lists(_NAMES, min_size=2, max_size=6, unique_by=str.casefold))
    placed = []
    for number in range(draw(st.integers(1, 8))):
        letter = draw(st.sampled_from(sorted(_VALUES)))
        pins = ["1", "2"] if letter != "U" else draw(st.lists(_NAMES, min_size=1, max_size=4, unique_by=str.casefold))
        tail = draw(st.sampled_from(["", "~x", ' "q"', "#a", "é", "%"]))
        value = draw(st.sampled_from(_VALUES[letter]))
        properties = {"Value": value} if value else {}
        placed.append(
            Placed(
                f"{letter}{number}{tail}",
                f"{letter}{len(pins)}_{number}",
                {p: draw(st.sampled_from(nets)) for p in pins},
                properties,
            )
        )
    return placed


_HABITS = st.builds(
    Habits,
    st.sampled_from(["name", "form", "property"]),
    st.sampled_from(["name", "port", "instance"]),
    st.booleans(),
    st.integers(1, 3),
)


def devices(board: Board) -> list[tuple[object, ...]]:
    """What a circuit is made of, in a fixed order."""
    rows = []
    for d in board.circuits[0].devices:
        value = d.values.get("value")
        numbers = (value.nominal, value.low, value.high) if value is not None else None
        ratings = {s: r.points for s, r in d.ratings.items() if s != "value"}
        rows.append((d.name, d.kind, sorted(d.pins.items()), numbers, repr(sorted(ratings.items()))))
    return sorted(rows, key=lambda row: str(row[0]))


@given(placed=circuits(), habits=_HABITS)
@settings(max_examples=150, deadline=None, derandomize=True)
def test_an_export_its_board_and_its_conversion_are_one_circuit(placed: list[Placed], habits: Habits) -> None:
    export = read_edif(edif(placed, habits).encode(), "b.edf")
    assert {i.name: dict(i.pins) for i in export.instances} == {p.name: dict(p.pins) for p in placed}
    netlist = read_netlist_text("netlist 1\n")
    from dataclasses import replace

    board = elaborate(replace(netlist, statements=(ExportStatement(export, Place("b.edf", 1)),)))
    converted = netaudit.loads(netlist_text(export, map_export(export, PartTable())))
    assert devices(converted.board) == devices(board)
