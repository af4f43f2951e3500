"""The Python interface: the example of its docstring, and the same verbs as the command line."""

from __future__ import annotations

import doctest
import importlib
from pathlib import Path

import pytest

import netaudit
from netaudit.failure import InputError

TEXT = "netlist 1\nground GND\nPS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=250mW 1:V 2:GND\n"


def test_example_of_the_docstring() -> None:
    failed, tried = doctest.testmod(importlib.import_module("netaudit"))
    assert tried > 2
    assert failed == 0


def test_load_reads_a_file_with_settings(tmp_path: Path) -> None:
    path = tmp_path / "a.netlist"
    path.write_text(TEXT, encoding="utf-8")
    board = netaudit.load(str(path), root=str(tmp_path), changes=["PS1=10V"])
    assert board.solve()[0].points[0].nets["V"] == 10.0
    assert {f.rule for f in board.lint()} == {"part/no-rating", "part/no-spread"}
    assert not board.audit("cautious", nominal=True, modes=["normal"]).fails("warning", require_complete=True)
    assert board.modes == ("normal",)


def test_unknown_mode_is_wrong_input() -> None:
    board = netaudit.loads(TEXT)
    for verb in (board.solve, board.audit):
        with pytest.raises(InputError, match="no mode 'high'"):
            verb(modes=["high"])


def test_wrong_text_names_its_place() -> None:
    with pytest.raises(InputError) as wrong:
        netaudit.loads("netlist 1\nR1 resistor 5V 1:A 2:B\n", name="bench")
    assert str(wrong.value).startswith("bench:2:")


def test_explain_gives_pages() -> None:
    assert netaudit.explain("point/back-feed").startswith("point/back-feed  (error)")
    assert "resistor" in netaudit.explain()
