"""Reports for people: what stands where, narrow terminals, colour, folded modes."""

from __future__ import annotations

import re

import pytest

import netaudit
from netaudit.report.style import Style, columns_of, table
from netaudit.report.text import audit_text, lint_text, solve_text

BOARD = """netlist 1
title "indicator"
ground GND
PS1 supply 12V 9V..15V +:V -:GND
R1 resistor 100R 10% P_tot=2W 1:V 2:M
R2 resistor 1R P_tot=2W 1:M 2:GND
S1 switch closed I_max=10A 1:M 2:GND
U1 unmodelled VCC:V GND:GND
mode "again"
  set R2 2R
end
"""


@pytest.fixture(scope="module")
def board() -> netaudit.interface.LoadedBoard:
    return netaudit.loads(BOARD, name="indicator.netlist")


def test_audit_says_verdict_coverage_findings_stresses_and_cautions(board: netaudit.interface.LoadedBoard) -> None:
    text = audit_text(board.audit(), True, Style(width=100), False, "1.2.3")
    lines = text.splitlines()
    assert lines[0] == "FAIL  audit of indicator.netlist  (not complete)  indicator"
    flat = " ".join(text.split())
    assert "4 of 5 parts audited" in flat
    assert "NOT AUDITED: U1 (no model)." in flat
    # 15 V on 90 ohm is 2.5 W; the same in both modes is one sentence
    assert "error stress/power [normal, again] indicator.netlist:5" in flat
    assert flat.count("stress/power") == 1
    assert "R1: power reaches 2.5 W at PS1 = 15 V, R1 = 90 ohm, beyond its rating of 2 W" in flat
    assert re.search(r"R1 +power +1\.44 W +2\.5 W +2 W +125 % +\w+ +normal: PS1=15V R1=90ohm", text)
    assert "The ambient is not stated: 25 degC is assumed." in flat
    assert "replaces no qualified review and no bench measurement" in flat
    assert "Mains and hazardous energy fall under local codes and licensed practice." in flat
    assert lines[-1] == "netaudit 1.2.3, policy none"


def test_notes_are_folded_unless_asked_for(board: netaudit.interface.LoadedBoard) -> None:
    audit = board.audit()
    folded = audit_text(audit, True, Style(), False, "1")
    whole = audit_text(audit, True, Style(), True, "1")
    assert folded.count("part/no-rating") == 1
    assert "--notes" in folded
    # PS1 lacks I_max, R1 and R2 V_max
    assert whole.count("part/no-rating") == 3


def test_policy_gaps_and_nominal_are_said(board: netaudit.interface.LoadedBoard) -> None:
    flat = " ".join(audit_text(board.audit("two-level-benign", nominal=True), True, Style(), False, "1").split())
    assert "Nominal values only" in flat
    assert "does not speak of resistor power, switch current: the full rating counts there" in flat


@pytest.mark.parametrize("width", [40, 60, 100])
def test_sentences_and_tables_keep_to_the_width(board: netaudit.interface.LoadedBoard, width: int) -> None:
    style = Style(width=width)
    for text in (
        lint_text(board.board, board.lint(), False, style, True),
        audit_text(board.audit(), True, style, True, "1"),
        solve_text(board.board, board.solve(), (), style, "1"),
    ):
        wide = [line for line in text.splitlines() if columns_of(line) > width]
        assert wide == []


def test_colour_only_on_a_terminal_that_wants_it(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("TERM", "xterm")
    monkeypatch.delenv("NO_COLOR", raising=False)
    assert Style.for_stream(True).colour
    assert not Style.for_stream(False).colour
    # any text that is not empty turns it off (no-color.org)
    monkeypatch.setenv("NO_COLOR", "1")
    assert not Style.for_stream(True).colour
    monkeypatch.delenv("NO_COLOR")
    monkeypatch.setenv("TERM", "dumb")
    assert not Style.for_stream(True).colour
    assert "\x1b" not in Style(colour=False).level("error")
    assert "\x1b" in Style(colour=True).level("error")


def test_columns_of_wide_characters_line_up() -> None:
    lines = table([["a", "b"], ["電圧", "x"], ["long name", "y"]], Style(width=80))
    assert [columns_of(line[: line.rindex(c)]) for line, c in zip(lines, "bxy", strict=True)] == [11, 11, 11]


def test_names_cannot_command_the_terminal() -> None:
    board = netaudit.loads('netlist 1\nground GND\nPS1 supply 12V +:V -:GND\nR1 resistor 1k 1:V 2:"a(b)"\n')
    text = lint_text(board.board, board.lint(), False, Style(), True)
    assert "a(b)" in text
    assert not [c for c in text if not c.isprintable() and c != "\n"]


def test_solve_shows_nets_and_pins(board: netaudit.interface.LoadedBoard) -> None:
    text = solve_text(board.board, board.solve(["normal"]), (), Style(), "1")
    assert re.search(r"^V +12 V$", text, re.MULTILINE)
    assert re.search(r"^R1 +resistor +1 120 mA +2 -120 mA +1\.44 W +25 degC$", text, re.MULTILINE)
    assert "Mode normal: one operating point" in text


def test_solve_says_that_a_part_runs_away() -> None:
    board = netaudit.loads(
        "netlist 1\nground GND\nPS1 supply 25V +:V -:GND\nR1 resistor 100R 1:V 2:T\n"
        "R2 thermistor 10k B=3950K R_th_ja=250K/W 1:T 2:GND\n"
    )
    text = " ".join(solve_text(board.board, board.solve(), (), Style(), "1").split())
    assert "error: R2 runs away thermally" in text
