"""One case, one result: everything computed for a page, nothing printed, no files."""

from pipeflow.study.result import ElementResult, MethodUse, Result, Totals
from pipeflow.study.solving import solve

__all__ = ["ElementResult", "MethodUse", "Result", "Totals", "solve"]
