"""Writes the JSON Schema of ``netaudit.toml`` that ships:  python -m tests.project.schema"""

from __future__ import annotations

import json
from pathlib import Path

import netaudit.project.keys as keys

SHIPPED = Path(keys.__file__).with_name("netaudit.schema.json")


def text() -> str:
    return json.dumps(keys.schema(), indent=2) + "\n"


if __name__ == "__main__":
    SHIPPED.write_text(text(), encoding="utf-8")
