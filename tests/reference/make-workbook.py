# Writes visits.xlsx with openpyxl 3.0.9, and what its first sheet shows as visits-from-workbook.csv with the csv module.
# The visits are invented. Run: python3 tests/reference/make-workbook.py
import csv
import datetime
import pathlib
import random

import openpyxl

here = pathlib.Path(__file__).parent
random.seed(11)
book = openpyxl.Workbook()
sheet = book.active
sheet.title = "Visits & stays"
book.create_sheet("Notes")["A1"] = "made by a script"
header = ["Arrived", "Left department", "Zone", "Outcome", "By ambulance", "Acuity"]
sheet.append(header)
lines = [header]
start = datetime.datetime(2026, 3, 1, 0, 30)
for row in range(40):
    arrival = start + datetime.timedelta(minutes=137 * row, seconds=random.randrange(60))
    departure = arrival + datetime.timedelta(minutes=random.randrange(30, 600))
    area = random.choice(["Acute", "ACUTE", "Minors"])
    route = random.choice(["Home", "Admitted to ward", "Left, did not wait"])
    ambulance = random.choice([True, False])
    acuity = random.choice([1, 2.5, 3])
    sheet.append([arrival, departure, area, route, ambulance, acuity])
    for cell in (sheet.cell(row + 2, 1), sheet.cell(row + 2, 2)):
        cell.number_format = "dd/mm/yyyy hh:mm:ss"
    show = "%Y-%m-%d %H:%M:%S"
    lines.append([arrival.strftime(show), departure.strftime(show), area, route, "true" if ambulance else "false", acuity])
book.save(here / "visits.xlsx")
with open(here / "visits-from-workbook.csv", "w", newline="") as file:
    csv.writer(file, lineterminator="\n").writerows(lines)
