"""A board for comparisons, git repositories to keep it in, and boards from text."""

from __future__ import annotations

import os
import subprocess
from dataclasses import replace
from pathlib import Path

import netaudit
from netaudit.audit.batch import BoardResult

VENT = """netlist 1
title "Greenhouse vent, indicator"
ground GND
ambient 25degC
PS1 supply 12V 10.8V..13.2V I_max=1A +:VIN -:GND
R1 resistor 1k 5% P_tot=250mW V_max=200V 1:VIN 2:A
D1 led material=red I_F=25mA V_R=5V P_tot=75mW T_j=100degC R_th_ja=300K/W A:A K:GND
R2 resistor 10k 5% P_tot=125mW V_max=200V 1:VIN 2:GND
"""
#: 430 ohm: R1 beyond 250 mW, D1 at its limit
HOT = VENT.replace("R1 resistor 1k", "R1 resistor 430R")
#: a little more, and much more
HOTTER = VENT.replace("R1 resistor 1k", "R1 resistor 420R")
HOTTEST = VENT.replace("R1 resistor 1k", "R1 resistor 330R")


def result(text: str, name: str = "vent.netlist", policy: str = "none") -> BoardResult:
    audit = netaudit.loads(text, name).audit(policy)
    return BoardResult(name, audit, audit.fails())


def git(folder: Path, *arguments: str) -> str:
    """Runs git away from the user's settings."""
    environment = {
        **{k: v for k, v in os.environ.items() if not k.startswith("GIT_")},
        "GIT_CONFIG_GLOBAL": os.devnull, "GIT_CONFIG_SYSTEM": os.devnull, "GIT_AUTHOR_NAME": "n",
        "GIT_AUTHOR_EMAIL": "n@example.org", "GIT_COMMITTER_NAME": "n", "GIT_COMMITTER_EMAIL": "n@example.org",
    }  # fmt: skip
    done = subprocess.run(
        ["git", "-c", "init.defaultBranch=main", "-c", "protocol.file.allow=always", "-C", str(folder), *arguments],
        capture_output=True, text=True, check=True, env=environment,
    )  # fmt: skip
    return done.stdout.strip()


def repository(folder: Path) -> Path:
    """A repository with one commit: a project with one board and a part table."""
    folder.mkdir(exist_ok=True)
    git(folder, "init", "-q")
    (folder / "boards").mkdir()
    (folder / "boards" / "vent.netlist").write_text(VENT, encoding="utf-8")
    (folder / "netaudit.toml").write_text('boards = ["boards/*.netlist"]\n', encoding="utf-8")
    commit(folder, "first")
    return folder


def commit(folder: Path, message: str) -> str:
    git(folder, "add", "-A")
    git(folder, "commit", "-q", "-m", message)
    return git(folder, "rev-parse", "HEAD")


def waived(board: BoardResult) -> BoardResult:
    """The board with every finding waived."""
    from netaudit.finding import Waived

    assert board.audit is not None
    findings = tuple(replace(f, waived=Waived("measured")) for f in board.audit.findings)
    return replace(board, audit=replace(board.audit, findings=findings))
