"""From results to files: figures, page, tables, JSON. Renders only, computes nothing."""

from reconcile.report.formats import ReportError, chosen
from reconcile.report.writing import write_report

__all__ = ["ReportError", "chosen", "write_report"]
