"""What the README shows is true: its netlists, its Python, its commands."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path

import netaudit

ROOT = Path(__file__).parent.parent
README = (ROOT / "README.md").read_text(encoding="utf-8")


def blocks(language: str) -> list[str]:
    return re.findall(rf"```{language}\n(.*?)```", README, re.DOTALL)


def test_it_opens_with_the_job_in_one_paragraph() -> None:
    first = README.split("\n\n")[1]
    assert "netaudit" in first
    assert len(first.splitlines()) > 3


def test_the_eight_lines_give_the_findings_that_it_names() -> None:
    (text, *_) = re.findall(r"```\n(netlist 1\n.*?)```", README, re.DOTALL)
    assert len(text.strip().splitlines()) == 8
    audit = netaudit.loads(text).audit()
    assert {("stress/power", "R1"), ("stress/forward-current", "D1")} <= {(f.rule, f.device) for f in audit.findings}
    assert audit.fails()
    mended = text.replace("330R 5% P_tot=125mW", "1k 5% P_tot=330mW")
    assert not netaudit.loads(mended).audit().fails()


def test_the_python_example_runs() -> None:
    (code,) = blocks("python")
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    assert 4.5 < float(done.stdout.split()[0]) < 5.5


def test_the_two_commands_are_what_continuous_integration_runs() -> None:
    first, second = blocks("sh")
    assert "netaudit audit sample_netlists/" in first
    sample = re.search(r"sample_netlists/\S+", first)
    assert sample is not None
    assert (ROOT / sample[0]).is_file()
    command = second.split("&&")[-1].strip().removeprefix(".venv/bin/")
    assert command in (ROOT / ".ci" / "run").read_text(encoding="utf-8")


def test_the_docstring_of_the_package_is_true() -> None:
    import doctest

    assert doctest.testmod(netaudit).failed == 0


def test_every_command_it_lists_exists() -> None:
    from netaudit.cli.main import parser

    text = parser().format_help()
    for name in re.findall(r"\| `netaudit (\w+)", README):
        assert name in text


def test_cautions_stand_in_it() -> None:
    for words in ("no qualified review", "bench", "Mains and hazardous energy"):
        assert words in README
