#!/usr/bin/env python3
"""Writes the workbooks of tests/data/formats: python3 tests/tools/make_formats.py tests/data/formats

Needs openpyxl, odfpy, xlwt, pyxlsbwriter, msoffcrypto-tool, and LibreOffice for what no library writes (its xls, ods and xlsx with
computed results). Each file comes from a writer that shares nothing with the program; what its cells have to read as stands by hand in
src/intake/workbook/tests/formats.rs.
"""
import datetime
import io
import os
import shutil
import subprocess
import sys
import tempfile

import msoffcrypto
import openpyxl
import xlwt
from odf.number import NumberStyle
from odf.office import Annotation
from odf.opendocument import OpenDocumentSpreadsheet
from odf.style import Style, TableProperties
from odf.table import CoveredTableCell, Table, TableCell, TableColumn, TableRow
from odf.text import LineBreak, P, S, Span, Tab
from openpyxl.cell.rich_text import CellRichText, TextBlock
from openpyxl.cell.text import InlineFont
from openpyxl.comments import Comment
from pyxlsbwriter import XlsbWriter

DAY = datetime.datetime(2026, 9, 14)
NOON = datetime.datetime(2026, 9, 14, 12, 0)
# Label, value, number format. Formulas come without a stored result from openpyxl, with one from LibreOffice.
KINDS = [
    ("text", "5/7a"),
    ("blanks kept", "  as found "),
    ("two lines", "upper\nlower"),
    ("special", "µΩ – 18 °C ✓ 😀"),
    ("number", 119.6),
    ("whole", -42),
    ("large", 1.25e9),
    ("percent", 0.18, "0 %"),
    ("unit in the format", 119.6, '0.0" volts m"'),
    ("date", DAY, "yyyy-mm-dd"),
    ("date and time", NOON, "dd.mm.yyyy hh:mm"),
    ("time of day", datetime.time(9, 30), "hh:mm"),
    ("elapsed", datetime.timedelta(hours=36), "[h]:mm"),
    ("true", True),
    ("false", False),
    ("sum", "=B5+B6"),
    ("joined", '=B1&"!"'),
    ("empty text", '=""'),
    ("compared", "=B5>0"),
    ("divided", "=1/0"),
    ("not there", "=NA()"),
]


def kinds(path):
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "Kinds"
    for row, (label, value, *form) in enumerate(KINDS, start=1):
        sheet.cell(row, 1, label)
        cell = sheet.cell(row, 2, value)
        if form:
            cell.number_format = form[0]
    sheet["B1"].comment = Comment("not part of the text", "Tobias Reck")
    sheet["C1"] = CellRichText("L1", TextBlock(InlineFont(b=True), "-N"), " bold")
    hidden = book.create_sheet("Hidden parts")
    for row in range(1, 7):
        for column in range(1, 6):
            hidden.cell(row, column, f"{row}/{column}")
    hidden.row_dimensions[2].hidden = True
    hidden.row_dimensions[9].hidden = True
    hidden.column_dimensions["C"].hidden = True
    hidden.column_dimensions["H"].hidden = True
    hidden.merge_cells("A4:B5")
    hidden["D6"] = None
    away = book.create_sheet("Away")
    away.sheet_state = "hidden"
    away["A1"] = "read all the same"
    book.create_sheet("Empty")
    book.save(path)


def epoch(path):
    """Dates counted from 1904."""
    book = openpyxl.Workbook()
    book.epoch = openpyxl.utils.datetime.CALENDAR_MAC_1904
    sheet = book.active
    sheet.title = "Dates"
    sheet["A1"], sheet["A1"].number_format = DAY, "yyyy-mm-dd"
    sheet["A2"], sheet["A2"].number_format = datetime.time(6, 0), "hh:mm"
    sheet["A3"] = 100
    book.save(path)


def plain_xls(path):
    book = xlwt.Workbook(encoding="utf-8")
    sheet = book.add_sheet("Readings")
    for column, head in enumerate(["Location", "L1-N", "L2-N", "L1-L2"]):
        sheet.write(0, column, head)
    sheet.write(1, 0, "5/7a – Küche ✓")
    for column, volts in enumerate([119.6, 120, 239.65], start=1):
        sheet.write(1, column, volts)
    sheet.write(2, 0, DAY.date(), xlwt.easyxf(num_format_str="YYYY-MM-DD"))
    sheet.write(2, 1, True)
    sheet.write(2, 2, xlwt.Formula("B2+C2"))
    sheet.write_rich_text(2, 3, ["L1", ("-N", xlwt.easyfont("bold on"))])
    sheet.write(3, 0, "below", xlwt.easyxf())
    sheet.write_merge(4, 5, 0, 1, "merged")
    sheet.row(3).hidden = True
    sheet.col(2).hidden = True
    away = book.add_sheet("Away")
    away.write(0, 0, "read all the same")
    away.visibility = 1
    # Enough different texts that their table goes on in further records, in the middle of a text, narrow and wide ones.
    many = book.add_sheet("Many")
    for row in range(400):
        many.write(row, 0, f"{row} " + ("Ω" if row % 3 else "o") * (row % 97))
    book.save(path)


def plain_xlsb(path):
    with XlsbWriter(path) as book:
        book.add_sheet("Readings")
        book.write_sheet([
            ["Location", "L1-N", "Date", "Tie", "Remarks"],
            ["5/7a – Küche ✓", 119.6, NOON, True, None],
            ["below", -42, DAY, False, "  blanks kept "],
        ])
        book.add_sheet("Away", hidden=True)
        book.write_sheet([["read all the same"]])


def hand_ods(path):
    document = OpenDocumentSpreadsheet()
    away = Style(name="away", family="table")
    away.addElement(TableProperties(display="false"))
    document.automaticstyles.addElement(away)

    def cell(*paragraphs, **attributes):
        element = TableCell(**attributes)
        for p in paragraphs:
            element.addElement(p)
        return element

    table = Table(name="Odd")
    table.addElement(TableColumn(numbercolumnsrepeated=2))
    table.addElement(TableColumn(visibility="collapse"))
    table.addElement(TableColumn(numbercolumnsrepeated=1021))

    row = TableRow()
    spaced = P()
    spaced.addElement(S(c=2))
    spaced.addText("two")
    spaced.addElement(S(c=3))
    spaced.addElement(Span(text="three"))
    spaced.addElement(Tab())
    spaced.addText("tab")
    spaced.addElement(LineBreak())
    spaced.addText("line")
    noted = cell(valuetype="string")
    note = Annotation()
    note.addElement(P(text="a comment, no part of the text"))
    noted.addElement(note)
    noted.addElement(P(text="first"))
    noted.addElement(P(text="second"))
    row.addElement(cell(spaced, valuetype="string"))
    row.addElement(noted)
    row.addElement(cell(P(text="119.6 V"), valuetype="float", value="119.6", numbercolumnsrepeated=3))
    row.addElement(TableCell(numbercolumnsrepeated=1019))
    table.addElement(row)

    row = TableRow(visibility="collapse", numberrowsrepeated=2)
    row.addElement(cell(P(text="twice"), valuetype="string"))
    row.addElement(TableCell(numbercolumnsrepeated=1023))
    table.addElement(row)

    row = TableRow()
    row.addElement(cell(P(text="spanned"), valuetype="string", numbercolumnsspanned=2, numberrowsspanned=2))
    row.addElement(CoveredTableCell())
    row.addElement(cell(P(text="18 %"), valuetype="percentage", value="0.18"))
    row.addElement(cell(P(text="14 September"), valuetype="date", datevalue="2026-09-14"))
    row.addElement(cell(P(text="half past nine"), valuetype="time", timevalue="PT09H30M00S"))
    row.addElement(cell(P(text="yes"), valuetype="boolean", booleanvalue="true"))
    row.addElement(TableCell(formula="of:=SUM([.C1:.E1])"))
    row.addElement(cell(P(text="Err:502"), formula="of:=LARGE([.A1];-1)", valuetype="string", stringvalue=""))
    table.addElement(row)

    row = TableRow()
    row.addElement(CoveredTableCell(numbercolumnsrepeated=2))
    row.addElement(cell(P(text="after the covered")))
    table.addElement(row)

    for repeated in (500, 1_047_000):
        row = TableRow(numberrowsrepeated=repeated)
        row.addElement(TableCell(numbercolumnsrepeated=1024))
        table.addElement(row)
    row = TableRow(visibility="filter")
    row.addElement(cell(P(text="last"), valuetype="string"))
    table.addElement(row)
    document.spreadsheet.addElement(table)

    table = Table(name="Away", stylename=away)
    row = TableRow()
    row.addElement(cell(P(text="read all the same"), valuetype="string"))
    table.addElement(row)
    document.spreadsheet.addElement(table)
    document.save(path)


def locked(source, path):
    with open(source, "rb") as plain, open(path, "wb") as out:
        msoffcrypto.OfficeFile(plain).encrypt("Alder Ferry", out)


def convert(source, target, form):
    """Has LibreOffice write a workbook again in a form of its own."""
    with tempfile.TemporaryDirectory() as folder:
        subprocess.run(["soffice", "--headless", f"-env:UserInstallation=file://{folder}/profile", "--convert-to", form,
                        "--outdir", folder, source], check=True, capture_output=True)
        stem = os.path.splitext(os.path.basename(source))[0]
        shutil.copy(os.path.join(folder, f"{stem}.{form.split(':')[0]}"), target)


def csv_folders(out):
    def write(folder, name, text, encoding):
        os.makedirs(os.path.join(out, folder), exist_ok=True)
        with open(os.path.join(out, folder, name), "w", encoding=encoding, newline="") as file:
            file.write(text)

    write("csv-plain", "Visit.csv", "Item,Entry\r\nClient,\"Okabe, Jun\"\r\n\r\nRemarks,\"said \"\"as found\"\"\r\nand left\"\r\n", "utf-8-sig")
    write("csv-plain", "Readings.csv", "Location,L1-N,Remarks\n5/7a,119.6,18 °C\n", "utf-8")
    write("csv-office", "Readings.csv", "Location;L1-N;Remarks\r\nKüche über dem Café;119,6;trocken, 18 °C\r\n", "cp1252")
    write("csv-office", "Visit.csv", "Item\tEntry\r\nClient\tOrla Penhallow – 5 Ω\r\n", "utf-16")


def main(out):
    os.makedirs(out, exist_ok=True)

    def at(name):
        return os.path.join(out, name)

    kinds(at("kinds.xlsx"))
    epoch(at("from-1904.xlsx"))
    plain_xls(at("plain.xls"))
    plain_xlsb(at("plain.xlsb"))
    hand_ods(at("hand.ods"))
    locked(at("from-1904.xlsx"), at("locked.xlsx"))
    convert(at("kinds.xlsx"), at("kinds.ods"), "ods")
    convert(at("kinds.xlsx"), at("kinds.xls"), "xls:MS Excel 97")
    convert(at("kinds.xlsx"), at("kinds.xlsm"), "xlsm:Calc MS Excel 2007 VBA XML")
    convert(at("from-1904.xlsx"), at("from-1904.xls"), "xls:MS Excel 97")
    csv_folders(out)


if __name__ == "__main__":
    main(sys.argv[1])
