"""Bytes of exports to text: UTF-8, else one of the 8-bit sets that capture tools write."""

from __future__ import annotations

import re

#: bytes that are Cyrillic letters in CP1251: a run of three, or a unit or prefix right after a number
_CYRILLIC = re.compile(
    rb"[\xc0-\xff]{3}|\d[ \xa0]?(?:[\xea\xca\xec\xcc\xed\xef\xc2\xc0\xd4\xee\xce]|[\xec\xea\xcc\xca]?\xce\xec)(?![a-z])"
)
#: numbers at the start that no schematic has: a byte-order mark of UTF-16
_WIDE = {b"\xff\xfe": "utf-16-le", b"\xfe\xff": "utf-16-be"}


def decode(data: bytes, encoding: str = "") -> tuple[str, str]:
    """The text and the set it was read in: UTF-8 (with or without byte-order mark), UTF-16 with one, the stated 8-bit
    ``encoding``; without one CP1251 where its letters stand as people use them, else CP1252."""
    wide = _WIDE.get(data[:2])
    if wide is not None:
        return data[2:].decode(wide, errors="replace"), wide
    try:
        return data.decode("utf-8-sig"), "utf-8"
    except UnicodeDecodeError:
        pass
    if encoding:
        return data.decode(encoding, errors="replace"), encoding
    if _CYRILLIC.search(data):
        return data.decode("cp1251", errors="replace"), "cp1251"
    return data.decode("cp1252", errors="replace"), "cp1252"
