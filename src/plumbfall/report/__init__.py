"""What a reduction shows: numbers, text, one page of HTML, JSON and CSV files."""

from __future__ import annotations

from plumbfall.report.report import Reduced, Report
from plumbfall.report.run_set import RunSetView
from plumbfall.report.summary import summary_line

__all__ = ["Reduced", "Report", "RunSetView", "summary_line"]
