"""Reports and figures from a record: HTML, Markdown, LaTeX, CSV, JSON, JUnit."""

from laplace_verify.report.plots import plot
from laplace_verify.report.writer import FORMATS, write_report

__all__ = ["FORMATS", "plot", "write_report"]
