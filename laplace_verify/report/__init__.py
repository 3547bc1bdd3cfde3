"""Reports and figures from a record: HTML, Markdown, LaTeX, CSV, JSON, JUnit."""

from laplace_verify.report.case_pictures import draw_cases
from laplace_verify.report.plots import plot, save_picture
from laplace_verify.report.samples import regenerate_reports
from laplace_verify.report.writer import FORMATS, check_folder, write_report

__all__ = [
    "FORMATS",
    "check_folder",
    "draw_cases",
    "plot",
    "regenerate_reports",
    "save_picture",
    "write_report",
]
