"""What the design file says of the document."""

from __future__ import annotations

from pipeflow.case.fields import Name
from pipeflow.case.part import Part


class JobPart(Part):
    """What the design file says of the document."""

    project: Name | None = None
    client: Name | None = None
    number: Name | None = None
    prepared_by: Name | None = None
    checked_by: Name | None = None
    approved_by: Name | None = None
    date: Name | None = None
