"""Workers: the same results wherever the pieces run, interruptions that keep what is done."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

import netaudit
import netaudit.solve.sensitivity as sensitivity
from netaudit import workers as room
from netaudit.audit.statistics import Plan
from netaudit.failure import InputError
from netaudit.report.json_text import audit_record
from netaudit.workers import IN_PROCESS, Interrupted, Unwatched, Workers, cluster, processes

SAMPLES = Path(__file__).parent.parent / "sample_netlists"
HEAD = "netlist 1\nground GND\nambient 25degC\n"
LADDER = (
    HEAD
    + "PS1 supply 12V 10.8V..13.2V +:V -:GND\n"
    + "\n".join(
        f"R{k} resistor 1k {1 + k % 7}% P_tot=125mW 1:{'V' if k == 0 else f'N{k - 1}'} 2:N{k}\n"
        f"D{k} diode I_S=1e-12 n=1.6 I_F=20mA V_R=50V A:N{k} K:GND"
        for k in range(9)
    )
    + "\n"
)


def double(piece: int, workers: Workers) -> int:
    return 2 * piece


def nested(piece: int, workers: Workers) -> list[int]:
    return list(workers.each(double, range(piece)))


def lonely(piece: int, workers: Workers) -> bool:
    return workers is IN_PROCESS


class StopAfter(Unwatched):
    """Stops after so many pieces."""

    def __init__(self, count: int) -> None:
        self.left = count

    def step(self, number: int) -> None:
        self.left -= 1

    @property
    def stopping(self) -> bool:  # type: ignore[override]
        return self.left <= 0


@pytest.fixture(scope="module")
def pool() -> Iterator[Workers]:
    workers = processes(2)
    yield workers
    workers.close()


@pytest.fixture(scope="module")
def scheduler() -> Iterator[Workers]:
    distributed = pytest.importorskip("distributed", reason="the extra cluster is not installed")
    with distributed.LocalCluster(
        n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None, host="127.0.0.1", silence_logs=50
    ) as local:
        workers = cluster(local.scheduler_address)
        assert workers.count == 2
        yield workers
        workers.close()


def record(workers: Workers, path: str) -> str:
    audit = netaudit.load(path).audit(workers=workers)
    return json.dumps(audit_record(audit, audit.fails(), "0"), sort_keys=True)


def drawn(workers: Workers) -> str:
    audit = netaudit.loads(LADDER).audit(plan=Plan(300), workers=workers)
    return json.dumps(audit_record(audit, audit.fails(), "0"), sort_keys=True)


def test_pieces_come_back_in_their_order(pool: Workers) -> None:
    assert list(pool.each(double, range(20))) == list(IN_PROCESS.each(double, range(20))) == list(range(0, 40, 2))
    assert list(pool.each(nested, [1, 2, 3])) == [[0], [0, 2], [0, 2, 4]]
    # several pieces work alone, a single one may hand out pieces of its own
    assert list(pool.each(lonely, [1, 2])) == [True, True]
    assert list(pool.each(lonely, [1])) == [False]


def test_modes_in_processes_give_the_same_audit(pool: Workers) -> None:
    path = str(SAMPLES / "valve_board_faulty.netlist")
    assert record(pool, path) == record(IN_PROCESS, path)


def test_corners_and_samples_in_processes_give_the_same_audit(pool: Workers, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sensitivity, "_MEMBERS", 16)
    assert drawn(pool) == drawn(IN_PROCESS)


def test_a_dask_scheduler_with_two_workers_gives_the_same_audit(
    scheduler: Workers, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = str(SAMPLES / "valve_board_faulty.netlist")
    assert record(scheduler, path) == record(IN_PROCESS, path)
    monkeypatch.setattr(sensitivity, "_MEMBERS", 64)
    assert drawn(scheduler) == drawn(IN_PROCESS)


def test_addresses_that_do_not_answer_are_wrong_input() -> None:
    pytest.importorskip("distributed", reason="the extra cluster is not installed")
    for address in ("nonsense", "tcp://127.0.0.1:1"):
        with pytest.raises(InputError):
            cluster(address)


def test_without_the_extra_the_error_says_what_to_install(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "distributed", None)
    with pytest.raises(InputError, match=r"netaudit\[cluster\]"):
        cluster("tcp://127.0.0.1:8786")


@pytest.mark.parametrize("count", [1, 2])
def test_a_stop_keeps_what_was_done(count: int) -> None:
    workers = processes(count, StopAfter(3))
    results = workers.each(double, range(50))
    assert [next(results) for _ in range(3)] == [0, 2, 4]
    with pytest.raises(Interrupted):
        next(results)
    workers.close()


@pytest.mark.parametrize("steps", range(4))
def test_an_interrupted_audit_is_partial_and_never_passes(steps: int) -> None:
    path = str(SAMPLES / "valve_board.netlist")
    whole = netaudit.load(path).audit()
    assert not whole.fails()
    assert whole.partial == ""
    audit = netaudit.load(path).audit(workers=Workers(watch=StopAfter(steps)))
    if audit.partial:
        assert audit.fails()
        assert not audit.complete
        assert audit_record(audit, True, "0")["partial"].startswith("interrupted: ")
    else:
        assert audit == whole or len(audit.stresses) == len(whole.stresses)
    assert audit.partial or steps > 1


def test_ctrl_c_gives_a_partial_report_and_status_1(tmp_path: Path) -> None:
    board = tmp_path / "long.netlist"
    board.write_text(LADDER, encoding="utf-8")
    out = tmp_path / "report.json"
    arguments = ["audit", str(board), "--samples", "200000", "--format", "json", "-o", str(out)]
    # the signal comes within a step in the middle, however fast the machine is
    script = (
        "import os, signal, sys\n"
        "from netaudit.cli.main import main\n"
        "from netaudit.solve.settle import Solver\n"
        "whole, calls = Solver.settle, []\n"
        "def settle(self, *a, **k):\n"
        "    calls.append(1)\n"
        "    if len(calls) == 8:\n"
        "        os.kill(os.getpid(), signal.SIGINT)\n"
        "    return whole(self, *a, **k)\n"
        "Solver.settle = settle\n"
        f"sys.exit(main({arguments!r}))\n"
    )
    started = subprocess.run(
        [sys.executable, "-c", script], capture_output=True, text=True, check=False, env={**os.environ, "COLUMNS": "80"}
    )
    said = started.stderr
    assert started.returncode == 1
    assert "stopping after this step" in said
    told = json.loads(out.read_text(encoding="utf-8"))
    assert told["verdict"] == "fail"
    assert told["complete"] is False
    assert "cut short" in told["partial"]
    assert told["stress"]


def test_counts_are_checked() -> None:
    for count in ("-1", "257", "x"):
        done = subprocess.run(
            [sys.executable, "-m", "netaudit", "audit", str(SAMPLES / "power_entry.netlist"), "--workers", count],
            capture_output=True, text=True, check=False,
        )  # fmt: skip
        assert done.returncode == 2
        assert done.stderr.count("\n") == 1
    assert room.IN_PROCESS.count == 1
