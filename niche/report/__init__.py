"""The report: one page that stands alone, tables others can compute with, figures, and a record of the run."""

from niche.report.csv_tables import csv_text, report_tables, write_tables
from niche.report.folder import check_folder
from niche.report.summary import Summary, summarise
from niche.report.writing import write_maps, write_report

__all__ = [
    "Summary",
    "check_folder",
    "csv_text",
    "report_tables",
    "summarise",
    "write_maps",
    "write_report",
    "write_tables",
]
