"""The page for the design file: one HTML file that needs nothing else, to read on a screen and to print on A4."""

from __future__ import annotations

from pipeflow.report.html.index import IndexRow as IndexRow
from pipeflow.report.html.index import index_page as index_page
from pipeflow.report.html.index import index_row as index_row
from pipeflow.report.html.index import unusable_row as unusable_row
from pipeflow.report.html.page import report_page as report_page
