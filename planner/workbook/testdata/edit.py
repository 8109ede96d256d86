"""Types edits into a workbook through LibreOffice's scripting bridge.

edit.py IN OUT EDITS: EDITS is a JSON list of
{"name": NAME, "value": V}, {"sheet": S, "cell": C, "value": V} (V null clears)
or {"sheet": S, "insert": ROW} / {"sheet": S, "delete": ROW}, rows from 0.
"""
import json, subprocess, sys, tempfile, time, uno
from com.sun.star.beans import PropertyValue


def prop(name, value):
    p = PropertyValue()
    p.Name, p.Value = name, value
    return p


def put(cell, value):
    if value is None:
        cell.setString("")
        cell.clearContents(1 | 2 | 4 | 16)
    else:
        cell.setValue(value)


source, target, edits = sys.argv[1], sys.argv[2], json.loads(sys.argv[3])
profile = tempfile.mkdtemp()
pipe = "swardbook%d" % time.time_ns()
office = subprocess.Popen(["soffice", "--headless", "--norestore", "-env:UserInstallation=file://" + profile,
                           "--accept=pipe,name=%s;urp;" % pipe])
try:
    local = uno.getComponentContext()
    resolver = local.ServiceManager.createInstanceWithContext("com.sun.star.bridge.UnoUrlResolver", local)
    for _ in range(120):
        try:
            context = resolver.resolve("uno:pipe,name=%s;urp;StarOffice.ComponentContext" % pipe)
            break
        except Exception:
            time.sleep(0.5)
    desktop = context.ServiceManager.createInstanceWithContext("com.sun.star.frame.Desktop", context)
    book = desktop.loadComponentFromURL("file://" + source, "_blank", 0, (prop("Hidden", True),))
    for edit in edits:
        if "name" in edit:
            put(book.NamedRanges.getByName(edit["name"]).getReferredCells().getCellByPosition(0, 0), edit["value"])
            continue
        sheet = book.Sheets.getByName(edit["sheet"])
        if "cell" in edit:
            put(sheet.getCellRangeByName(edit["cell"]), edit["value"])
            continue
        sheet.unprotect("")
        if "insert" in edit:
            sheet.Rows.insertByIndex(edit["insert"], 1)
        else:
            sheet.Rows.removeByIndex(edit["delete"], 1)
    book.calculateAll()
    book.storeToURL("file://" + target, (prop("FilterName", "Calc MS Excel 2007 XML"),))
    book.close(True)
    try:
        desktop.terminate()
    except Exception:
        pass
finally:
    try:
        office.wait(30)
    except subprocess.TimeoutExpired:
        office.kill()
