"""Results shown: the report as one HTML file, tables for a terminal, and JSON and CSV for machines."""

from retrofit.report.html import render_html, render_site_copy, write_report

__all__ = ["render_html", "render_site_copy", "write_report"]
