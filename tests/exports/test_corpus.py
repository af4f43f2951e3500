"""Exports with the habits of many capture tools, each with the netlist that it must become.

``python -m tests.exports.test_corpus`` writes the expected netlists anew: every changed word of the difference must be
meant.
"""

from __future__ import annotations

import contextlib
import io
import os
from pathlib import Path

import pytest

import netaudit
from netaudit.cli.main import main

CORPUS = Path(__file__).parent / "corpus"
EXPORTS = sorted(p.name for p in CORPUS.iterdir() if p.suffix in (".edf", ".csv"))
BLOCK = (
    "ground GND\nPS1 supply 12V R=1 limit=1A +:VIN -:GND\nblock clamp LOW HIGH MID\nD1 diode I_S=1e-12 n=1.5 A:LOW K:MID\n"
    "D2 diode I_S=1e-12 n=1.5 A:MID K:HIGH\nend\n"
)


def converted(name: str) -> str:
    """What ``convert`` writes for one export, its list of parts with it."""
    listed = [f"lists/{name}"] if (CORPUS / "lists" / name).exists() else []
    out = io.StringIO()
    before = os.getcwd()
    os.chdir(CORPUS)
    try:
        with contextlib.redirect_stdout(out):
            assert main(["convert", name, *listed, "--parts", "parts.toml"]) == 0
    finally:
        os.chdir(before)
    return out.getvalue()


@pytest.mark.parametrize("name", EXPORTS)
def test_each_becomes_its_netlist(name: str) -> None:
    assert converted(name) == (CORPUS / f"{name}.expected").read_text(encoding="utf-8")


@pytest.mark.parametrize("name", EXPORTS)
def test_including_the_export_and_its_netlist_is_the_same(name: str, tmp_path: Path) -> None:
    for source in [*CORPUS.glob("*.toml"), CORPUS / name]:
        (tmp_path / source.name).write_bytes(source.read_bytes())
    include = f'include "{name}"\n'
    if (CORPUS / "lists" / name).exists():
        (tmp_path / "list.csv").write_bytes((CORPUS / "lists" / name).read_bytes())
        include += 'include "list.csv"\n'
    (tmp_path / "a.netlist").write_text(f'netlist 1\nparts "parts.toml"\n{include}{BLOCK}', encoding="utf-8")
    (tmp_path / "b.netlist").write_text(converted(name) + BLOCK, encoding="utf-8")
    first, second = (netaudit.load(str(tmp_path / f"{n}.netlist")) for n in "ab")
    for circuit, again in zip(first.board.circuits, second.board.circuits, strict=True):
        assert {(d.name, d.kind, tuple(sorted(d.pins.items()))) for d in circuit.devices} == {
            (d.name, d.kind, tuple(sorted(d.pins.items()))) for d in again.devices
        }
        assert set(circuit.omitted) == set(again.omitted)
        assert {d.name: d.values.get("value") for d in circuit.devices} == {
            d.name: d.values.get("value") for d in again.devices
        }


if __name__ == "__main__":
    for each in EXPORTS:
        (CORPUS / f"{each}.expected").write_text(converted(each), encoding="utf-8")
