"""The result as a spreadsheet: Read me, Inputs, Results, Points, Year and Sources, one table a sheet.

Numbers are numbers, unrounded, with the unit in the heading; what is not known is an empty cell with its reason in a
column, never 0; a text is a text, whatever it begins with.
"""

from retrofit.report.spreadsheet.workbook import render_spreadsheet, require_spreadsheet

__all__ = ["render_spreadsheet", "require_spreadsheet"]
