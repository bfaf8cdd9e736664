"""A generated page written, or with ``--check`` compared: what the scripts of this folder share."""

from __future__ import annotations

import sys
from pathlib import Path


def write_or_compare(path: Path, text: str) -> int:
    """Write the page; with ``--check`` on the command line say whether it is fresh, exit status 1 if it is not."""
    fresh = path.exists() and path.read_text(encoding="utf-8") == text
    if "--check" in sys.argv:
        print(f"{path.name} is {'fresh' if fresh else 'stale'}")
        return 0 if fresh else 1
    if not fresh:
        path.write_text(text, encoding="utf-8")
    return 0
