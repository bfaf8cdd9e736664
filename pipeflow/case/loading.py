"""A case file to a :class:`pipeflow.case.model.Case`, or every reason why it cannot be one."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

from pipeflow.case.building import build_case
from pipeflow.case.checking import examine
from pipeflow.case.files import printable, read_text_file, refusal
from pipeflow.case.model import Case, Uncertain
from pipeflow.case.nodes import Finding, Mapping, Node, UnreadableError, read_tree
from pipeflow.case.scenarios import read_scenarios
from pipeflow.errors import InputError, Problem

MAX_BYTES = 256 * 1024


def load_case(path: str | Path) -> Case:
    """Read a case file.

    Parameters
    ----------
    path : str or Path
        A regular file, UTF-8, at most 256 kB.

    Returns
    -------
    Case
        In SI units, with its scenarios.

    Raises
    ------
    InputError
        The file cannot be used; carries every problem found, in file order.
    """
    if not str(path):
        raise refusal("''", "an empty file name; a case is a file")
    return load_text(read_text_file(Path(path), MAX_BYTES, "a case"), str(path))


def load_text(text: str, file: str = "case.yaml") -> Case:
    """Read the text of a case file like :func:`load_case`.

    Errors and the case name ``file``, and paths in the text start from its folder; it need not be there itself.
    """
    try:
        tree, notation = read_tree(text)
    except UnreadableError as error:
        raise _input_error(file, [error.finding]) from None
    folder = Path(file).parent
    part, faults = examine(tree, folder)
    scenarios, scenario_faults = read_scenarios(tree, [*notation, *faults], folder)
    case = None if part is None else build_case(part, file)
    uncertain, uncertain_faults = _uncertainty(tree, case)
    found = [*notation, *faults, *scenario_faults, *uncertain_faults]
    if found or case is None:
        raise _input_error(file, found)
    built = {name: build_case(changed, file) for name, changed in scenarios.items()}
    return replace(case, uncertainty=uncertain, scenarios=built)


def _uncertainty(tree: Node, case: Case | None) -> tuple[tuple[Uncertain, ...], list[Finding]]:
    """Read how uncertain the inputs are, where the case says it at all."""
    if not (isinstance(tree, Mapping) and "uncertainty" in tree.values):
        return (), []
    from pipeflow.case.uncertainty_part import read_uncertainty

    return read_uncertainty(tree, case)


def _input_error(file: str, findings: list[Finding]) -> InputError:
    ordered = sorted(findings, key=lambda finding: (finding.line or 0, finding.column or 0))
    return InputError([Problem(printable(file), f.line, f.column, f.key_path, f.message) for f in ordered])
