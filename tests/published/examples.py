"""The published examples of this folder's YAML files, by id.

``printed_precision`` of each figure is the absolute tolerance of its printed digits (or of the chart it was read from);
``obtained`` says whether it was read, read in a public reworking of the example (the book's last digit may differ), or
recalled from memory.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from pathlib import Path

import pytest
import yaml

FOLDER = Path(__file__).parent
TOPICS = sorted(FOLDER.glob("[01][0-9]_*.yaml"))
GRAVITY = 9.80665


@dataclass(frozen=True)
class Example:
    id: str
    printed: dict[str, tuple[float, float]]
    obtained: str

    def agrees(self, **computed: float) -> bool:
        """Assert that each figure lies within the printed precision of its own, told by name."""
        for name, value in computed.items():
            printed, precision = self.printed[name]
            assert float(value) == pytest.approx(printed, abs=precision, rel=0), f"{self.id} {name}"
        return True

    def value(self, name: str) -> float:
        return self.printed[name][0]


@cache
def examples() -> dict[str, Example]:
    found = {}
    for topic in TOPICS:
        for entry in yaml.safe_load(topic.read_text(encoding="utf-8")):
            printed = {
                item["name"]: (float(item["value"]), float(item["printed_precision"])) for item in entry["expected"]
            }
            assert entry["id"] not in found
            found[entry["id"]] = Example(entry["id"], printed, entry["obtained"])
    return found


def example(identity: str) -> Example:
    return examples()[identity]
