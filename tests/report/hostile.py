"""Names that would do harm on a page that did not write them as text."""

from __future__ import annotations

from dataclasses import fields, replace
from itertools import count

from pipeflow.case.model import Case, Job

NAMES = (
    "<script>alert(1)</script>",
    '"><img src=x onerror=alert(1)>',
    "' onload='alert(1)",
    "]]><svg onload=alert(1)>",
    "</style><script>alert(1)</script>",
    "--><script>alert(1)</script><!--",
    "{{ 7 * 7 }}{% raw %}",
    "$\\frac{1}{2}$ & co; \\3c script\\3e",
    "\u202eright to left\u200f",
    "a\x00b\x1bc",
    "W" * 120,
    "名前 اسم",
)


def spoilt(case: Case, first: int = 0) -> Case:
    """The case, without pumps, with one name after another wherever it takes one, and a scenario of itself."""
    turn = count(first)

    def name() -> str:
        place = next(turn)
        return f"{NAMES[place % len(NAMES)]} {place}"

    route = tuple(replace(element, name=name()) for element in case.route)
    renamed = {old.name: new.name for old, new in zip(case.route, route, strict=True)}
    changed = {
        "route": route,
        "sizes": {renamed[pipe]: size for pipe, size in case.sizes.items()},
        "default_roughness": {renamed[pipe]: material for pipe, material in case.default_roughness.items()},
        "title": name(),
        "revision": name(),
        "notes": name(),
        "job": Job(*(name() for _ in fields(Job))),
        "file": f"{name()}.yaml",
        "pumps": (),
        "restart": replace(case.restart, pump_after=None),
    }
    return replace(case, **changed, scenarios={name(): replace(case, **changed, scenarios={})})
