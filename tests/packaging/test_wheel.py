"""The grammars are found in a wheel, an editable install and a bare checkout alike."""

from __future__ import annotations

import subprocess
import sys
import zipfile
from pathlib import Path

ROOT = Path(__file__).parent.parent.parent
PARSE = (
    "import netaudit; board = netaudit.loads('netlist 1\\nground GND\\nPS1 supply 6V +:A -:GND\\nR1 resistor 1k 1:A 2:GND\\n');"
    " print(netaudit.__file__, board.solve()[0].points[0].nets['A'])"
)


def test_wheel_parses_after_being_unpacked_elsewhere(tmp_path: Path) -> None:
    subprocess.run(
        [sys.executable, "-m", "build", "--wheel", "--no-isolation", "--outdir", str(tmp_path), str(ROOT)],
        check=True,
        capture_output=True,
    )
    (wheel,) = tmp_path.glob("*.whl")
    target = tmp_path / "site"
    with zipfile.ZipFile(wheel) as archive:
        names = archive.namelist()
        archive.extractall(target)
    assert {"netaudit/grammar/netlist.lark", "netaudit/grammar/edif.lark", "netaudit/parts/common.toml"} <= set(names)
    code = f"import sys; sys.path.insert(0, {str(target)!r}); {PARSE}"
    done = subprocess.run([sys.executable, "-P", "-c", code], cwd=tmp_path, capture_output=True, text=True, check=True)
    where, volts = done.stdout.split()
    assert Path(where).is_relative_to(target)
    assert volts == "6.0"


def test_checkout_parses_without_being_installed(tmp_path: Path) -> None:
    code = f"import sys; sys.path.insert(0, {str(ROOT)!r}); {PARSE}"
    done = subprocess.run([sys.executable, "-P", "-c", code], cwd=tmp_path, capture_output=True, text=True, check=True)
    assert done.stdout.split()[1] == "6.0"
