"""Blocks opened: names, private and global nets, parameters, what is refused, and how far they may multiply."""

from __future__ import annotations

import pytest

import netaudit
from netaudit.circuit.circuit import Board
from netaudit.failure import InputError

HEAD = "netlist 1\nground GND\nPS1 supply 12V +:V -:GND\n"
DIVIDER = "block DIV IN OUT R=1k\nR1 resistor $R 1:IN 2:OUT\nR2 resistor 2k 1:OUT 2:M\nR3 resistor 1k 1:M 2:GND\nend\n"


def opened(text: str) -> Board:
    return netaudit.loads(HEAD + text).board


def refused(text: str) -> InputError:
    with pytest.raises(InputError) as found:
        netaudit.loads(HEAD + text)
    return found.value


def test_parts_and_private_nets_carry_the_name_of_the_block_placed() -> None:
    board = opened(DIVIDER + "A1 DIV IN:V OUT:X\nA2 DIV R=3k IN:X OUT:Y\n")
    devices = {d.name: d for d in board.circuits[0].devices}
    assert list(devices) == ["PS1", "A1/R1", "A1/R2", "A1/R3", "A2/R1", "A2/R2", "A2/R3"]
    assert devices["A1/R2"].pins == {"1": "X", "2": "A1/M"}
    assert devices["A2/R3"].pins == {"1": "A2/M", "2": "GND"}
    assert [devices[n].nominal("value") for n in ("A1/R1", "A2/R1")] == [1e3, 3e3]


def test_blocks_nest_and_hand_parameters_down() -> None:
    text = DIVIDER + "block PAIR IN Q=5k\nA DIV R=$Q IN:IN OUT:T\nB DIV IN:T OUT:nc\nend\nX1 PAIR Q=7k IN:V\n"
    devices = {d.name: d for d in opened(text).circuits[0].devices}
    assert devices["X1/A/R1"].nominal("value") == 7e3
    assert devices["X1/B/R1"].nominal("value") == 1e3
    assert devices["X1/A/R1"].pins == {"1": "V", "2": "X1/T"}


def test_a_block_may_be_defined_after_its_use() -> None:
    assert len(opened("A1 DIV IN:V OUT:X\n" + DIVIDER).circuits[0].devices) == 4


@pytest.mark.parametrize(
    ("text", "line", "said"),
    [
        ("A1 DIV IN:V\n" + DIVIDER, 4, "pin OUT of the DIV is not connected"),
        ("A1 DIV IN:V OUT:X UOT:Y\n" + DIVIDER, 4, "a DIV has no pin UOT; did you mean OUT?"),
        ("A1 DIV RR=2k IN:V OUT:X\n" + DIVIDER, 4, "block DIV has no key RR; did you mean R?"),
        ("A1 DIV 2k IN:V OUT:X\n" + DIVIDER, 4, "a block takes keys and pins only"),
        ("A1 DVI IN:V OUT:X\n" + DIVIDER, 4, "there is no kind or block DVI; did you mean DIV?"),
        ("block B A\nX B A:A\nend\nA1 B A:V\n", 5, "block B contains itself"),
        ("block B A\nR1 resistor $R 1:A 2:GND\nend\nA1 B A:V\n", 5, "there is no parameter $R here"),
        ("block led A\nend\n", 4, "a block may not be called led"),
    ],
)
def test_what_is_refused_names_its_line(text: str, line: int, said: str) -> None:
    error = refused(text)
    assert said in str(error)
    assert error.place is not None
    assert error.place.line == line


def test_blocks_that_multiply_are_refused_before_they_fill_the_memory() -> None:
    levels = "".join(
        f"block B{k} A\n" + "".join(f"X{j} B{k - 1} A:A\n" for j in range(10)) + "end\n" for k in range(1, 9)
    )
    error = refused("block B0 A\nR1 resistor 1k 1:A 2:GND\nend\n" + levels + "A1 B8 A:V\n")
    assert "A1: the netlist opens to more than 1,000,000 devices" in str(error)


def test_a_thousand_levels_need_no_stack() -> None:
    levels = "".join(f"block B{k} A\nX B{k - 1} A:A\nend\n" for k in range(1, 1500))
    board = opened("block B0 A\nR1 resistor 1k 1:A 2:GND\nend\n" + levels + "A1 B1499 A:V\n")
    assert len(board.circuits[0].devices) == 2
