"""What is stored of a case, what changed between two runs of it, and why."""

from pipeflow.record.document import document

__all__ = ["document"]
