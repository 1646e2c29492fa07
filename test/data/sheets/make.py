"""Makes the Excel fixtures with openpyxl: /usr/bin/python3 test/data/sheets/make.py (formula results are written in by hand,
since no spreadsheet program computes them here)."""
import datetime
import pathlib
import re
import zipfile

import openpyxl

HERE = pathlib.Path(__file__).parent
STAMP = datetime.datetime(2024, 1, 1)


def save(book, name, results=None):
    book.properties.created = book.properties.modified = STAMP
    path = HERE / name
    book.save(path)
    # Formula cells get the result a spreadsheet program would have saved; times of the archive's members are fixed.
    parts = [(info, zipfile.ZipFile(path).read(info)) for info in zipfile.ZipFile(path).infolist()]
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as out:
        for info, data in parts:
            if info.filename == "xl/worksheets/sheet1.xml" and results:
                text = data.decode()
                for cell, value in results.items():
                    text = re.sub(rf'(<c r="{cell}"[^>]*><f>[^<]*</f>)<v ?/?>(</v>)?', rf"\g<1><v>{value}</v>", text)
                data = text.encode()
            member = zipfile.ZipInfo(info.filename, (2024, 1, 1, 0, 0, 0))
            member.compress_type = zipfile.ZIP_DEFLATED
            out.writestr(member, data)


# A title, a header of two rows with merged cells, real dates, a formula, a text among numbers, an empty cell.
book = openpyxl.Workbook()
sheet = book.active
sheet.title = "Daily"
sheet.append(["Weather of the valley"])
sheet.append(["Day", "Rain (mm)", None, "Tmax (degC)", None])
sheet.append([None, "Ash", "Beck", "Ash", "Beck"])
sheet.merge_cells("B2:C2")
sheet.merge_cells("D2:E2")
rows = [
    (datetime.date(2001, 2, 28), 1.5, 0, 10.1, 9.5),
    (datetime.date(2001, 3, 1), "=B4*2", 2, 11, None),
    (datetime.date(2001, 3, 2), "n/a", 4, 12.3, 8),
]
for row in rows:
    sheet.append(row)
for row in sheet["A4:A6"]:
    row[0].number_format = "dd.mm.yyyy"
other = book.create_sheet("Sites")
other.append(["site", "day", "rain"])
other.append(["007", "2001-01-01", 3])
other.append(["007", "2001-01-02", 4])
other["A2"].number_format = other["A3"].number_format = "@"
save(book, "daily.xlsx", {"B5": 3})

# Times within the day, in the calendar that counts from 1904.
book = openpyxl.Workbook()
book.epoch = openpyxl.utils.datetime.CALENDAR_MAC_1904
sheet = book.active
sheet.append(["time", "t"])
for hour in range(0, 24, 6):
    sheet.append([datetime.datetime(2001, 7, 1, hour, 30), 10 + hour])
for row in sheet["A2:A5"]:
    row[0].number_format = "yyyy-mm-dd hh:mm"
save(book, "hours-1904.xlsx")
