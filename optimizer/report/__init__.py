"""A run as a report: one page for a decision and an appendix for engineers, as HTML, PDF and slides."""

from optimizer.report.content import Report, report

__all__ = ["Report", "report"]
