"""Types edits into workbooks through LibreOffice's scripting bridge.

edit.py JOBS: JOBS is a JSON file, a list of {"source": path, "steps": [...]};
each step is {"target": path, "edits": [...]}: its edits are typed, the book is
recalculated, saved as target, closed and opened again for the next step. One
LibreOffice does all jobs. The edits:

{"name": NAME, "value": V}             types into the first cell of a defined name
{"name": NAME, "row": I, "value": V}   into its cell number I, from 0
{"name": NAME, "day": D, "value": V}   into its cell in the row of the day, a date
                                       as the spreadsheet numbers it
{"name": NAME, ..., "rows": "insert"}  puts an empty row above that cell's
{"name": NAME, ..., "rows": "delete"}  deletes that cell's row

{"sheet": S, "cell": C, "value": V}    types into a cell
{"sheet": S, "insert": ROW}            puts an empty row there, rows from 0
{"sheet": S, "delete": ROW}            deletes the row

V is a number; null clears the cell. A locked cell, or one that does not hold
afterwards what was typed, ends everything.
"""
import json, os, signal, subprocess, sys, tempfile, time, uno
from com.sun.star.beans import PropertyValue


def prop(name, value):
    p = PropertyValue()
    p.Name, p.Value = name, value
    return p


def cells_of(book, name):
    return book.NamedRanges.getByName(name).getReferredCells()


def find(book, edit):
    cells = cells_of(book, edit["name"])
    row = edit.get("row", 0)
    if "day" in edit:
        days = [r[0] for r in cells_of(book, "d_date").getDataArray()]
        row = days.index(edit["day"])
    return cells.getCellByPosition(0, row)


def put(cell, value, edit):
    if cell.CellProtection.IsLocked:
        raise SystemExit("locked: %s" % edit)
    if value is None:
        cell.clearContents(1 | 2 | 4 | 16)
    else:
        cell.setValue(value)
    if value is None and cell.getString() or value is not None and cell.getValue() != value:
        raise SystemExit("not taken: %s" % edit)


def change_rows(sheet, at, insert):
    sheet.unprotect("")
    if insert:
        sheet.Rows.insertByIndex(at, 1)
    else:
        sheet.Rows.removeByIndex(at, 1)


def do(book, edit):
    if "sheet" in edit:
        sheet = book.Sheets.getByName(edit["sheet"])
        if "cell" not in edit:
            return change_rows(sheet, edit["insert" if "insert" in edit else "delete"], "insert" in edit)
        cell = sheet.getCellRangeByName(edit["cell"])
    else:
        cell = find(book, edit)
        if "rows" in edit:
            return change_rows(cell.Spreadsheet, cell.CellAddress.Row, edit["rows"] == "insert")
    put(cell, edit["value"], edit)


def run(desktop, jobs):
    hidden = (prop("Hidden", True),)
    for job in jobs:
        source = job["source"]
        for step in job["steps"]:
            book = desktop.loadComponentFromURL("file://" + source, "_blank", 0, hidden)
            for edit in step["edits"]:
                do(book, edit)
            book.calculateAll()
            source = step["target"]
            book.storeToURL("file://" + source, (prop("FilterName", "Calc MS Excel 2007 XML"),))
            book.close(True)


jobs = json.load(open(sys.argv[1]))
profile = tempfile.TemporaryDirectory()
pipe = "swardbook%d" % time.time_ns()
office = subprocess.Popen(["soffice", "--headless", "--norestore", "-env:UserInstallation=file://" + profile.name,
                           "--accept=pipe,name=%s;urp;" % pipe],
                          stdin=subprocess.DEVNULL, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL, start_new_session=True)
try:
    local = uno.getComponentContext()
    resolver = local.ServiceManager.createInstanceWithContext("com.sun.star.bridge.UnoUrlResolver", local)
    for _ in range(240):
        try:
            context = resolver.resolve("uno:pipe,name=%s;urp;StarOffice.ComponentContext" % pipe)
            break
        except Exception:
            time.sleep(0.25)
    desktop = context.ServiceManager.createInstanceWithContext("com.sun.star.frame.Desktop", context)
    try:
        run(desktop, jobs)
    finally:
        try:
            desktop.terminate()
        except Exception:
            pass  # it ends while it answers
        try:
            office.wait(20)
        except subprocess.TimeoutExpired:
            pass
finally:
    try:  # what is left of the session that was started above
        os.killpg(office.pid, signal.SIGKILL)
    except ProcessLookupError:
        pass
