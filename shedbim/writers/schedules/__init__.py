"""Schedules: tables computed from a shed, and written as CSV or as one workbook."""
