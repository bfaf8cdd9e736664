"""What to write for a pipe size the catalogue does not know: one without its schedule, by DN or in inches."""

from __future__ import annotations

import re
from fractions import Fraction
from functools import cache

from pipeflow.line.catalogue import find_size, size_names, table
from pipeflow.units import ECHO_LENGTH

_STEEL = re.compile(
    r"(?P<mark>nps|dn)? ?(?P<size>[0-9]+(?:[- ][0-9]+/[1-9][0-9]*|/[1-9][0-9]*|\.[0-9]+)?)"
    r" ?(?P<inch>\"|''|″|”|inch(?:es)?|in\.?)?[ ,]*(?P<schedule>sch.*)?"
)
_POLYETHYLENE = re.compile(r"(?P<mark>od|pe|dn|hdpe)? ?(?P<size>[0-9]+)(?: ?mm)?[ ,]*(?P<ratio>sdr.*)?")
_LENGTH = re.compile(r"[0-9.]+ ?(?:mm|cm|m)")


def advice(written: str) -> str:
    """Say what a size is called, where it can be made out; empty where it cannot.

    Examples
    --------
    >>> advice("OD 25")
    'the SDR is missing: OD 25 SDR 13.6, SDR 11, SDR 7.4'
    >>> advice("4 inch sch 40")
    'did you mean NPS 4 Sch 40?'
    """
    text = " ".join(written.casefold().split())
    if len(text) > ECHO_LENGTH:
        return ""
    return _of_polyethylene(text) or _of_steel(text) or _of_a_length(text)


def _of_steel(text: str) -> str:
    match = _STEEL.fullmatch(text)
    if match is None or not (match["mark"] or match["inch"] or match["schedule"]):
        return ""
    is_metric = match["mark"] == "dn"
    nominal = _by_dn().get(match["size"]) if is_metric else _by_inches().get(_inches(match["size"]))
    if nominal is None:
        return ""
    if match["schedule"]:
        return _with_ending(f"NPS {nominal}", re.sub("^sch(edule)?[. ]*", "sch ", match["schedule"]), "schedule")
    listed = _listed(f"NPS {nominal}")
    if is_metric:
        return f"steel of DN {match['size']} is {listed}{_tube('DIN 11850 series 2 DN' + match['size'])}"
    if match["inch"]:
        return f"steel of {match['size']} in is {listed}{_tube(f'BPE {nominal}')}"
    return f"the schedule is missing: {listed}"


def _of_polyethylene(text: str) -> str:
    match = _POLYETHYLENE.fullmatch(text)
    if match is None or not (match["mark"] in ("od", "pe", "hdpe") or match["ratio"]):
        return ""
    nominal = f"OD {match['size']}"
    if nominal not in _endings():
        return ""
    if match["ratio"]:
        return _with_ending(nominal, re.sub("^sdr *", "sdr ", match["ratio"]), "SDR")
    return f"the SDR is missing: {_listed(nominal)}"


def _with_ending(nominal: str, written: str, what: str) -> str:
    meant = [ending for ending in _endings()[nominal] if ending.casefold() == written]
    if meant:
        return f"did you mean {nominal} {meant[0]}?"
    return f"no such {what} of this size is known: {_listed(nominal)}"


def _listed(nominal: str) -> str:
    return f"{nominal} {', '.join(_endings()[nominal])}"


def _tube(name: str) -> str:
    return f"; or tube: {name}" if find_size(name) else ""


def _of_a_length(text: str) -> str:
    if _LENGTH.fullmatch(text):
        return "a size is a name, as NPS 8 Sch 40; give an inside diameter as 'diameter'"
    return ""


def _inches(written: str) -> Fraction:
    return sum((Fraction(part) for part in re.split("[- ]", written)), Fraction())


@cache
def _endings() -> dict[str, tuple[str, ...]]:
    """Schedules by ``NPS 4``, SDRs by ``OD 160``."""
    endings: dict[str, tuple[str, ...]] = {}
    for name in size_names():
        match = re.fullmatch(r"((?:NPS|OD) \S+) (.+)", name)
        if match:
            endings[match[1]] = (*endings.get(match[1], ()), match[2])
    return endings


@cache
def _by_dn() -> dict[str, str]:
    return {row["DN"]: row["NPS"] for row in table("pipe_asme_b36_10m.csv")}


@cache
def _by_inches() -> dict[Fraction, str]:
    return {_inches(name): name for name in _by_dn().values()}
