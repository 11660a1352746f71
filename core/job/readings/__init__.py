"""Pasted reports: text from an e-mail, a PDF or a table, read into entries for the user to confirm.

report = read_report(text)
report.found          values beyond doubt, each beside the words it came from
report.questions      what can mean several things, with the choices
report.left           all else, with the reason; `report.not_understood` is what deserves a second look
"""

from core.job.readings.reader import LARGEST, read_report
from core.job.readings.report import Found, Left, Question, Report

__all__ = ["LARGEST", "Found", "Left", "Question", "Report", "read_report"]
