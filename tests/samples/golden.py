"""Golden reports of the sample netlists.  Regenerate them, after looking at the difference, with

python -m tests.samples.golden
"""

from __future__ import annotations

import contextlib
import json
from pathlib import Path
from typing import Any

import netaudit
from netaudit.report.json_text import audit_record
from netaudit.report.style import Style
from netaudit.report.text import audit_text

HERE = Path(__file__).parent
ROOT = HERE.parent.parent
SAMPLES = sorted((ROOT / "sample_netlists").glob("*.netlist"))


def reports(path: Path) -> tuple[str, str]:
    """Text and JSON of a sample's audit, numbers rounded to six digits and without what changes from day to day."""
    # by names that do not tell where the repository lies: they decide where lines wrap
    with contextlib.chdir(path.parent):
        board = netaudit.load(path.name, ".")
    audit = board.audit()
    text = audit_text(audit, audit.fails(), Style(), False, "VERSION")
    record = _rounded(audit_record(audit, audit.fails(), "VERSION"))
    for told_apart in ("files", "parts"):
        record.pop(told_apart)
    for finding in record["findings"]:
        # a sample has no waivers
        assert finding.pop("waived") is None
    return text, json.dumps(record, indent=1, ensure_ascii=False) + "\n"


def _rounded(value: Any) -> Any:
    if isinstance(value, float):
        return 0.0 if abs(value) < 1e-12 else float(f"{value:.6g}")
    if isinstance(value, dict):
        return {k: _rounded(v) for k, v in value.items()}
    if isinstance(value, (list, tuple)):
        return [_rounded(v) for v in value]
    return value


def main() -> None:
    (HERE / "golden").mkdir(exist_ok=True)
    for path in SAMPLES:
        text, record = reports(path)
        (HERE / "golden" / f"{path.stem}.txt").write_text(text, encoding="utf-8")
        (HERE / "golden" / f"{path.stem}.json").write_text(record, encoding="utf-8")


if __name__ == "__main__":
    main()
