"""Drives an office for the tests: runs in a Python that has `uno`, takes and gives one JSON text a line.

Usage: calc_driver.py PIPE
"""

import json
import os
import sys
import time

import uno
from com.sun.star.beans import PropertyValue

FILTERS = {".xlsx": "Calc MS Excel 2007 XML", ".ods": "calc8", ".pdf": "calc_pdf_Export"}


def url_of(path):
    return uno.systemPathToFileUrl(os.path.abspath(path))


def prop(name, value):
    made = PropertyValue()
    made.Name, made.Value = name, value
    return made


def connect(pipe):
    local = uno.getComponentContext()
    resolver = local.ServiceManager.createInstanceWithContext("com.sun.star.bridge.UnoUrlResolver", local)
    end = time.monotonic() + 60
    while True:
        try:
            return resolver.resolve(f"uno:pipe,name={pipe};urp;StarOffice.ComponentContext")
        except Exception:
            if time.monotonic() > end:
                raise
            time.sleep(0.05)


def cells_of(area):
    """Return each cell as {"error": code}, {"number": x} or {"text": s}, which is empty for a blank."""
    out = []
    for r, row in enumerate(area.getDataArray()):
        line = []
        for c, value in enumerate(row):
            if isinstance(value, float):
                line.append({"number": value})
            elif isinstance(value, str):
                line.append({"text": value})
            else:  # an error arrives as nothing
                line.append({"error": area.getCellByPosition(c, r).getError()})
        out.append(line)
    return out


class Driver:
    def __init__(self, pipe):
        self.context = connect(pipe)
        self.desktop = self.context.ServiceManager.createInstanceWithContext(
            "com.sun.star.frame.Desktop", self.context
        )
        self.documents = {}

    def document(self, url):
        key = len(self.documents)
        self.documents[key] = self.desktop.loadComponentFromURL(url, "_blank", 0, (prop("Hidden", True),))
        return key

    def new(self):
        return self.document("private:factory/scalc")

    def load(self, path):
        return self.document(url_of(path))

    def sheets(self, doc):
        return list(self.documents[doc].Sheets.ElementNames)

    def modified(self, doc):
        return self.documents[doc].isModified()

    def area(self, doc, sheet, where):
        sheets = self.documents[doc].Sheets
        found = sheets.getByIndex(sheet) if isinstance(sheet, int) else sheets.getByName(sheet)
        return found.getCellRangeByName(where)

    def put(self, doc, sheet, cells):
        """Set cells: numbers, texts, None for blank; texts that begin with = are formulas as typed."""
        for where, value in cells.items():
            cell = self.area(doc, sheet, where).getCellByPosition(0, 0)
            if value is None:
                cell.setString("")
            elif isinstance(value, str) and value.startswith("="):
                cell.FormulaLocal = value
            elif isinstance(value, str):
                cell.setString(value)
            else:
                cell.setValue(value)

    def fill(self, doc, sheet, where, rows):
        """Set a block; formulas here carry the long names."""
        self.area(doc, sheet, where).setFormulaArray(tuple(tuple(r) for r in rows))

    def array(self, doc, sheet, where, formula):
        self.area(doc, sheet, where).setArrayFormula(formula)

    def automatic(self, doc, on):
        self.documents[doc].enableAutomaticCalculation(on)

    def formula(self, doc, sheet, where):
        cell = self.area(doc, sheet, where).getCellByPosition(0, 0)
        return [cell.Formula, cell.FormulaLocal]

    def read(self, doc, sheet, where):
        return cells_of(self.area(doc, sheet, where))

    def read_each(self, doc, sheet, places):
        """Return several blocks of cells, each as `read` does."""
        return [self.read(doc, sheet, where) for where in places]

    def calculate(self, doc):
        start = time.perf_counter()
        self.documents[doc].calculateAll()
        return time.perf_counter() - start

    def used(self, doc, sheet):
        found = self.area(doc, sheet, "A1").Spreadsheet
        cursor = found.createCursor()
        cursor.gotoEndOfUsedArea(False)
        return [cursor.RangeAddress.EndColumn + 1, cursor.RangeAddress.EndRow + 1]

    def name(self, doc, name):
        """Return the cells of a defined name, as `read` does."""
        return cells_of(self.documents[doc].NamedRanges.getByName(name).getReferredCells())

    def conditions(self, doc, sheet):
        found = self.area(doc, sheet, "A1").Spreadsheet
        return [
            f.getByIndex(k).Formula1
            for f in found.ConditionalFormats.getConditionalFormats()
            for k in range(f.getCount())
        ]

    def save(self, doc, path):
        filter_name = FILTERS[os.path.splitext(path)[1]]
        self.documents[doc].storeToURL(url_of(path), (prop("FilterName", filter_name),))

    def close(self, doc):
        self.documents.pop(doc).close(True)
        self.documents[doc] = None

    def wizard(self):
        """Return what the function wizard shows: name -> [help, [[argument, help], ...]]."""
        listed = self.context.ServiceManager.createInstanceWithContext(
            "com.sun.star.sheet.FunctionDescriptions", self.context
        )
        out = {}
        for i in range(listed.Count):
            entry = {p.Name: p.Value for p in listed.getByIndex(i)}
            if entry["Name"].startswith("RB_"):
                arguments = [[a.Name, a.Description, a.IsOptional] for a in entry["Arguments"]]
                out[entry["Name"]] = [entry["Description"], arguments]
        return out

    def terminate(self):
        try:
            self.desktop.terminate()
        except Exception:
            return False  # the line breaks while the office ends
        return True


def main():
    answers = os.fdopen(os.dup(1), "w", encoding="utf-8")
    os.dup2(2, 1)
    driver = Driver(sys.argv[1])
    print("{}", file=answers, flush=True)
    for line in sys.stdin:
        what, arguments = json.loads(line)
        try:
            reply = {"value": getattr(driver, what)(*arguments)}
        except Exception as error:
            reply = {"failed": f"{type(error).__name__}: {error}"}
        print(json.dumps(reply), file=answers, flush=True)


main()
