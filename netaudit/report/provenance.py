"""What every report says about itself: by which netaudit and policy it was made, from which files, and its cautions."""

from __future__ import annotations

import os
import time
from urllib.parse import quote

from netaudit.audit.batch import Batch
from netaudit.report.json_text import CAUTIONS

#: one paragraph for formats without room for several
CAUTION = " ".join(CAUTIONS)


def policies(batch: Batch) -> str:
    """``cautious``; several where boards belong to different projects."""
    return ", ".join(batch.policies) or "none"


def timestamp() -> str:
    """Now, in UTC (ISO 8601 without a zone); SOURCE_DATE_EPOCH stands for it where builds are to be repeatable."""
    stated = os.environ.get("SOURCE_DATE_EPOCH", "")
    seconds = int(stated) if stated.isdigit() else None
    return time.strftime("%Y-%m-%dT%H:%M:%S", time.gmtime(seconds))


def uri(path: str) -> str:
    """A file as a URI reference (RFC 3986): relative where the path is."""
    plain = quote(path.replace(os.sep, "/"), safe="/~-._!$&'()*+,;=@")
    if os.path.isabs(path):
        return f"file://{plain}"
    # a colon in the first piece of a relative reference would be read as a scheme
    return plain.removeprefix("./")
