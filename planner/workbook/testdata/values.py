"""Prints the first sheet of workbooks as a reader sees them that never recalculates.

values.py BOOK...: a JSON list, for each book its cells by name: numbers as they
are, dates as the spreadsheet numbers them, texts.
"""
import datetime, json, sys
import openpyxl
from openpyxl.utils.datetime import to_excel


def plain(value):
    if isinstance(value, (datetime.datetime, datetime.date, datetime.time)):
        return to_excel(value)
    return value


books = []
for path in sys.argv[1:]:
    sheet = openpyxl.load_workbook(path, data_only=True, read_only=True).worksheets[0]
    books.append({cell.coordinate: plain(cell.value) for row in sheet.iter_rows() for cell in row if cell.value is not None})
json.dump(books, sys.stdout)
