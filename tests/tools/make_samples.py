#!/usr/bin/env python3
"""Writes the workbooks of samples/: python3 tests/tools/make_samples.py samples  (needs numpy and openpyxl)

Readings come from a nodal solution of each invented site (numpy, conductor ohms at 25 C from NEC chapter 9 table 8 values,
loads of constant resistance or filaments with I proportional to V^0.55), plus a small meter error from a fixed seed. This solver
shares nothing with the program, so that the samples are an outside check of it.
"""
import datetime
import sys
import zipfile

import numpy as np
import openpyxl

# NEC chapter 9 table 8, ohm per 1000 ft at 75 C; brought to 25 C by the table's own coefficients.
OHMS_75 = {"14 Cu": 3.07, "12 Cu": 1.93, "10 Cu": 1.21, "8 Cu": .764, "6 Cu": .491, "4 Cu": .308, "3 Cu": .245, "2 Cu": .194,
           "1/0 Cu": .122, "2/0 Cu": .0967, "4/0 Cu": .0608, "2 Al": .319, "1/0 Al": .201, "2/0 Al": .159, "4/0 Al": .100}
ALPHA = {"Cu": .00323, "Al": .00330}
COLUMNS = ["Circuit", "Fed from", "Serves", "Legs", "Breaker A", "Tie", "Wire", "Neutral wire", "Length ft",
           "Load W L1", "Load W L2", "Load W L3", "Load W L1-L2", "Load W L2-L3", "Load W L3-L1", "Load kind", "Remarks"]
PHASORS = {
    "120/240": {"L1": 120, "L2": -120},
    "208Y/120": {"L1": 120, "L2": 120 * np.exp(-2j * np.pi / 3), "L3": 120 * np.exp(2j * np.pi / 3)},
    "240/120": {"L1": 120, "L2": -1j * 120 * 3 ** .5, "L3": -120},
}


def ohms(wire, feet):
    metal = wire.split()[1]
    return OHMS_75[wire] * feet / 1000 * (1 + ALPHA[metal] * (25 - 75))


def conductors(legs):
    return legs.split("-") if "-" in legs else legs.split() + ["N"]


class Site:
    """runs: (circuit, fed from, serves, legs, breaker, tie, wire, feet, {load: watts}, kind)"""

    def __init__(self, system, runs, supply=1.0):
        self.system, self.runs, self.supply = system, runs, supply
        self.index = {}
        for r in runs:
            for c in conductors(r[3]):
                self.index[r[0], c] = len(self.index)

    def solve(self, added=None, extra=None):
        """added: {(circuit, conductor): ohms}; extra: [(circuit, leg, watts)] resistive loads switched on."""
        added, extra = added or {}, extra or []
        source = {k: v * self.supply for k, v in PHASORS[self.system].items()} | {"N": 0}
        n = len(self.index)
        base, rhs = np.zeros((n, n), complex), np.zeros(n, complex)
        for name, fed, _, legs, _, _, wire, feet, _, _ in self.runs:
            for c in conductors(legs):
                g = 1 / (ohms(wire, feet) + added.get((name, c), 0) + 1e-4)
                b = self.index[name, c]
                base[b, b] += g
                if fed is None:
                    rhs[b] += g * source[c]
                else:
                    a = self.index[fed, c]
                    base[a, a] += g
                    base[a, b] -= g
                    base[b, a] -= g
        root = next(r[0] for r in self.runs if r[1] is None)
        base[self.index[root, "N"], self.index[root, "N"]] += 1 / 18.0  # ground electrode to the transformer
        loads = []
        for name, _, _, _, _, _, _, _, watts, kind in self.runs:
            for between, w in watts.items():
                a, b = (between, "N") if "-" not in between else between.split("-")
                v0 = abs(source[a] - source[b]) / self.supply
                loads.append((self.index[name, a], self.index[name, b], w, v0, kind))
        loads += [(self.index[name, leg], self.index[name, "N"], w, 120.0, "resistive") for name, leg, w in extra]
        x = np.zeros(n, complex)
        g_of = [w / v0 ** 2 for _, _, w, v0, _ in loads]
        for _ in range(400):
            y = base.copy()
            for g, (a, b, *_rest) in zip(g_of, loads):
                y[a, a] += g
                y[b, b] += g
                y[a, b] -= g
                y[b, a] -= g
            new = np.linalg.solve(y, rhs)
            step = np.abs(new - x).max()
            x = new
            g_of = [w / v0 ** 2 * (max(abs(x[a] - x[b]), 1) / v0) ** -.45 if kind == "filament" else w / v0 ** 2
                    for a, b, w, v0, kind in loads]
            if step < 1e-9:
                break
        return x, source, added

    def volts(self, x, name, a, b):
        return abs(x[self.index[name, a]] - x[self.index[name, b]])

    def current(self, solution, name, c):
        x, source, added = solution
        _, fed, _, _, _, _, wire, feet, _, _ = next(r for r in self.runs if r[0] == name)
        up = source[c] if fed is None else x[self.index[fed, c]]
        return abs(up - x[self.index[name, c]]) / (ohms(wire, feet) + added.get((name, c), 0) + 1e-4)


def take(site, plan, rng, clamp=()):
    """plan: [(state, stage, solution, [locations])] -> rows of the Readings sheet."""
    legs = list(PHASORS[site.system])
    pairs = [("L1", "L2")] if len(legs) == 2 else [("L1", "L2"), ("L2", "L3"), ("L3", "L1")]
    gain = 1 + rng.uniform(-.001, .001)
    rows, hour = [], 9 * 60
    for state, stage, solution, locations in plan:
        x = solution[0]
        for name in locations:
            hour += 4
            have = conductors(next(r for r in site.runs if r[0] == name)[3])
            row = {"Location": name, "State": state, "Stage": stage, "Time": f"{hour // 60:02d}:{hour % 60:02d}", "Instrument": "Meter M1"}
            put = lambda q, v: row.__setitem__(q, round(v * gain + rng.normal(0, .04), 1))
            for leg in legs:
                if leg in have and "N" in have:
                    put(f"{leg}-N", site.volts(x, name, leg, "N"))
            for a, b in pairs:
                if a in have and b in have:
                    put(f"{a}-{b}", site.volts(x, name, a, b))
            if "N" in have:
                root = site.runs[0][0]
                row["N-G"] = round(abs(x[site.index[name, "N"]] - x[site.index[root, "N"]]) + abs(rng.normal(0, .02)), 1)
            if name in clamp:
                for leg in legs:
                    if leg in have:
                        row[f"I {leg}"] = round(site.current(solution, name, leg) * (1 + rng.normal(0, .003)), 1)
                if "N" in have:
                    row["I N"] = round(site.current(solution, name, "N") * (1 + rng.normal(0, .003)), 1)
            rows.append(row)
    return rows


def workbook(path, visit, site, rows, tests=(), observations=(), work=(), spoil=None, calibrated=datetime.date(2027, 2, 28)):
    wb = openpyxl.Workbook()
    ws = wb.active
    ws.title = "Visit"
    ws.append(["Item", "Entry"])
    for item in visit.items():
        ws.append(item)
    ws = wb.create_sheet("Instruments")
    ws.append(["Instrument", "Measures", "Serial", "Calibrated until", "Accuracy % of reading", "Accuracy counts", "Resolution"])
    ws.append(["Meter M1", "volts", "AF-3307", calibrated, .5, 2, .1])
    ws.append(["Clamp C1", "amps", "AF-1190", calibrated, 1.5, 3, .1])
    ws = wb.create_sheet("Circuits")
    ws.append(COLUMNS)
    for name, fed, serves, legs, breaker, tie, wire, feet, watts, kind in site.runs:
        row = dict.fromkeys(COLUMNS)
        row.update({"Circuit": name, "Fed from": fed, "Serves": serves, "Legs": legs, "Breaker A": breaker, "Tie": tie, "Wire": wire, "Length ft": feet, "Load kind": kind})
        row.update({f"Load W {between}": w for between, w in watts.items()})
        ws.append([row[c] for c in COLUMNS])
    ws = wb.create_sheet("Readings")
    quantities = [q for q in ["L1-N", "L2-N", "L3-N", "L1-L2", "L2-L3", "L3-L1", "N-G", "I L1", "I L2", "I L3", "I N"] if any(q in r for r in rows)]
    header = ["Location", "State", "Stage", "Time", "Instrument"] + quantities + ["Remarks"]
    ws.append(header)
    for r in rows:
        ws.append([r.get(h) for h in header])
    for name, header, body in (("Tests", ["Location", "Test", "Value", "Unit", "Stage", "Remarks"], tests),
                               ("Observations", ["Location", "Observation", "Signal word", "Advice", "Photo"], observations),
                               ("Work", ["Date", "Location", "Work done", "Parts"], work)):
        if body:
            ws = wb.create_sheet(name)
            ws.append(header)
            for row in body:
                ws.append(row)
    if spoil:
        spoil(wb)
    for ws in wb:
        for column in ws.columns:
            ws.column_dimensions[column[0].column_letter].width = min(42, 2 + max(len(str(c.value or "")) for c in column))
    wb.properties.created = wb.properties.modified = datetime.datetime(2026, 9, 14, 12)
    wb.properties.creator = "Kestrel & Rowe Electrical"
    wb.save(path)
    settle(path)


def settle(path):
    """The same bytes each time: fixed times in the container and in the properties."""
    with zipfile.ZipFile(path) as z:
        parts = [(i.filename, z.read(i)) for i in z.infolist()]
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as z:
        for name, data in parts:
            if name == "docProps/core.xml":
                import re
                data = re.sub(rb"(<dcterms:modified[^>]*>)[^<]*", rb"\g<1>2026-09-14T12:00:00Z", data)
            z.writestr(zipfile.ZipInfo(name, (2026, 9, 14, 12, 0, 0)), data, zipfile.ZIP_DEFLATED)


def visit(job, client, address, day, purpose="inspection", system="120/240", rating="200 A", by="Ines Marlow", licence="Inspector 0417"):
    return {"Job number": job, "Client": client, "Site address": address, "Visit date": day, "Purpose": purpose, "Prepared by": by,
            "Licence": licence, "Company": "Kestrel & Rowe Electrical", "System": system, "Service rating": rating,
            "Supplied by": "Ferry Valley Light & Water", "Code in force": "as adopted by the town of Alder Ferry", "Weather": "dry, 18 °C"}


def house(**changes):
    runs = [
        ("SVC", None, "service panel, cellar", "L1 L2", 200, "yes", "4/0 Al", 70, {}, None),
        ("SP1", "SVC", "subpanel, workshop", "L1 L2", 60, "yes", "6 Cu", 55, {"L1": 400, "L2": 350}, "resistive"),
        ("1/3", "SVC", "kitchen counter, multiwire", "L1 L2", 20, "yes", "12 Cu", 28, {}, None),
        ("1/3a", "1/3", "counter left", "L1 L2", None, None, "12 Cu", 8, {"L1": 600, "L2": 150}, "resistive"),
        ("1/3b", "1/3a", "counter right", "L1 L2", None, None, "12 Cu", 9, {"L1": 120, "L2": 700}, "resistive"),
        ("5/7", "SVC", "living room, multiwire", "L1 L2", 15, "yes", "14 Cu", 24, {}, None),
        ("5/7a", "5/7", "north wall", "L1 L2", None, None, "14 Cu", 12, {"L1": 180, "L2": 60}, "filament"),
        ("5/7b", "5/7a", "window", "L1 L2", None, None, "14 Cu", 10, {"L1": 100, "L2": 300}, "resistive"),
        ("8", "SVC", "bathroom", "L2", 20, None, "12 Cu", 35, {"L2": 250}, "resistive"),
        ("9", "SVC", "bedrooms", "L1", 15, None, "14 Cu", 40, {"L1": 200}, "filament"),
        ("12/14", "SVC", "water heater", "L1-L2", 30, "yes", "10 Cu", 22, {"L1-L2": 4500}, "resistive"),
        ("10", "SVC", "laundry", "L1", 20, None, "12 Cu", 26, {"L1": 500}, "resistive"),
    ]
    return [tuple(changes.get(r[0], {}).get(i, v) for i, v in enumerate(r)) for r in runs]


def main(folder):
    day = datetime.date(2026, 9, 14)
    two = ["SVC", "SP1", "1/3a", "1/3b", "5/7a", "5/7b"]
    all_ = two + ["8", "9", "10"]
    heater = "1500 W heater on"

    site = Site("120/240", house(), 1.004)
    rows = take(site, [("as found", "as found", site.solve(), all_), (heater, "as found", site.solve(extra=[("SVC", "L1", 1500)]), ["SVC", "1/3b", "5/7b"])],
                np.random.default_rng(11), clamp=("SVC",))
    workbook(f"{folder}/sound-house.xlsx", visit("AF-2101", "Orla Penhallow", "4 Quarry Lane, Alder Ferry", day), site, rows,
             tests=[["SVC", "ground electrode resistance", 14, "ohm", "as found", None], ["8", "GFCI trip time at 6 mA", 180, "ms", "as found", None]])

    rows = take(site, [("as found", "as found", site.solve({("SVC", "N"): 2.6}), all_),
                       (heater, "as found", site.solve({("SVC", "N"): 2.6}, [("SVC", "L1", 1500)]), ["SVC", "1/3b"])], np.random.default_rng(12), clamp=("SVC",))
    workbook(f"{folder}/open-service-neutral.xlsx", visit("AF-2102", "Jun Okabe", "17 Lantern Row, Alder Ferry", day), site, rows,
             observations=[["SVC", "Lamps brighten when the kettle is switched on", "WARNING", "Call Ferry Valley Light & Water today", None]])

    rows = take(site, [("as found", "as found", site.solve({("5/7a", "N"): 1e6}), all_)], np.random.default_rng(13))
    workbook(f"{folder}/shared-neutral-open.xlsx", visit("AF-2103", "Orla Penhallow", "4 Quarry Lane, Alder Ferry", day), site, rows)

    rows = take(site, [("as found", "as found", site.solve({("10", "L1"): 2.1}), all_)], np.random.default_rng(14))
    workbook(f"{folder}/high-resistance-hot.xlsx", visit("AF-2104", "Tilda Brandt", "9 Millrace Street, Alder Ferry", day), site, rows)

    fault = {("1/3b", "N"): 4.0}
    rows = take(site, [("as found", "as found", site.solve(fault), all_), ("as found", "as left", site.solve(), ["SVC", "1/3a", "1/3b", "5/7a"])], np.random.default_rng(15))
    workbook(f"{folder}/service-call.xlsx", visit("AF-2105", "Piotr Halloran", "22 Millrace Street, Alder Ferry", day, "service call", by="Tobias Reck", licence="Electrician 2286"), site, rows,
             work=[[day, "1/3b", "Neutral splice in the box remade, conductors pigtailed", "one splice, 0.3 m of 12 Cu"]],
             tests=[["1/3b", "torque of the device terminals, specified 1.6", 1.6, "N·m", "as left", None]])

    shop = Site("208Y/120", [
        ("MDP", None, "main panel", "L1 L2 L3", 200, "yes", "4/0 Cu", 60, {}, None),
        ("2/4/6", "MDP", "bench row, multiwire", "L1 L2 L3", 20, "yes", "12 Cu", 30, {"L1": 500, "L2": 450, "L3": 480}, "resistive"),
        ("7", "MDP", "counter", "L1", 20, None, "12 Cu", 25, {"L1": 300}, "resistive"),
        ("9", "MDP", "window", "L2", 20, None, "12 Cu", 28, {"L2": 350}, "resistive"),
        ("11", "MDP", "store", "L3", 20, None, "12 Cu", 32, {"L3": 330}, "resistive"),
        ("13/15", "MDP", "kiln", "L1-L2", 30, "yes", "10 Cu", 24, {"L1-L2": 3000}, "resistive"),
        ("17/19", "MDP", "oven", "L2-L3", 30, "yes", "10 Cu", 24, {"L2-L3": 3000}, "resistive"),
        ("21/23", "MDP", "water heater", "L1-L3", 30, "yes", "10 Cu", 24, {"L3-L1": 3000}, "resistive"),
    ], 1.002)
    rows = take(shop, [("as found", "as found", shop.solve(), ["MDP", "2/4/6", "7", "9", "11"])], np.random.default_rng(16), clamp=("MDP",))
    workbook(f"{folder}/shop-208y.xlsx", visit("AF-2106", "Lantern Row Bakery", "3 Lantern Row, Alder Ferry", day, system="208Y/120"), shop, rows)

    delta = Site("240/120", [
        ("MDP", None, "workshop panel", "L1 L2 L3", 200, "yes", "4/0 Cu", 50, {}, None),
        ("1", "MDP", "lights", "L1", 20, None, "12 Cu", 30, {"L1": 600}, "resistive"),
        ("3", "MDP", "office", "L3", 20, None, "12 Cu", 28, {"L3": 620}, "resistive"),
        ("5/7", "MDP", "bench heaters", "L3-L1", 30, "yes", "10 Cu", 26, {"L3-L1": 3600}, "resistive"),
    ], 1.003)
    rows = take(delta, [("as found", "as found", delta.solve(), ["MDP", "1", "3"])], np.random.default_rng(17), clamp=("MDP",))
    workbook(f"{folder}/workshop-delta.xlsx", visit("AF-2107", "Millrace Joinery", "40 Millrace Street, Alder Ferry", day, system="240/120"), delta, rows)

    def spoil(wb):
        r, c, v = wb["Readings"], wb["Circuits"], wb["Visit"]
        column = {cell.value: cell.column for cell in r[1]}
        put = lambda row, name, value: setattr(r.cell(row, column[name]), "value", value)
        put(2, "L1-N", "12o.1")                 # a letter for a digit
        put(3, "L2-N", 1196)                    # a lost decimal point
        put(4, "L1-L2", "=#REF!")               # an error
        put(5, "L1-N", "119.6?")                # a doubtful one
        put(6, "L2-N", "see photo")             # text
        put(7, "L1-N", "119,6 V")               # decimal comma and unit: readable
        put(8, "L2-N", "n/a")                   # not measured: no report
        put(9, "L1-N", "119.6 kV")              # a wrong unit
        put(10, "N-G", "<0.5")                  # an upper bound
        r.cell(1, r.max_column + 1, "Glove class")
        r.cell(2, r.max_column, "00")           # a column nobody knows
        names = {cell.value: cell.column for cell in c[1]}
        c.cell(4, names["Wire"], "12")          # no metal
        c.cell(7, names["Legs"], "blue")        # no legs
        c.cell(9, names["Fed from"], "SP9")     # an unknown source
        c.cell(11, names["Breaker A"], "twenty")
        v.cell(5, 2, "14.09.26?")               # a date that is none
    rows = take(site, [("as found", "as found", site.solve(), all_)], np.random.default_rng(18))
    workbook(f"{folder}/bad-cells.xlsx", visit("AF-2108", "Jun Okabe", "17 Lantern Row, Alder Ferry", day), site, rows, spoil=spoil)


if __name__ == "__main__":
    main(sys.argv[1] if len(sys.argv) > 1 else "samples")
