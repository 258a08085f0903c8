"""Our tables of form factors and scattering lengths against the package periodictable.

Usage: tables_periodictable.py DATA_FOLDER; exits 1 and lists the differences when there are any.
"""

import csv
import math
import sys
from pathlib import Path

import periodictable


def rows(path):
    lines = [line for line in path.read_text().splitlines() if not line.startswith("#")]
    return list(csv.reader(lines))[1:]


def split_ion(text):
    element = text.rstrip("+0123456789")
    charge = text[len(element) :].rstrip("+")
    return element, int(charge or 0)


def radial(order, coefficients, s):
    A, a, B, b, C, c, D = coefficients
    total = A * math.exp(-a * s * s) + B * math.exp(-b * s * s) + C * math.exp(-c * s * s) + D
    return total if order == 0 else s * s * total


def main(folder):
    faults = []
    values = 0
    for name, integral, *cells in rows(folder / "form_factors.csv"):
        element, charge = split_ion(name)
        theirs = periodictable.elements.symbol(element).magnetic_ff[charge]
        coefficients = [float(cell) for cell in cells]
        for s in (0.0, 0.1, 0.25, 0.5, 0.9):
            expected = float(getattr(theirs, integral + "_Q")(4 * math.pi * s))
            values += 1
            if abs(radial(int(integral[1]), coefficients, s) - expected) > 1e-9:
                faults.append(f"{name} {integral} at s = {s}")
    for nuclide, length, absorption in rows(folder / "scattering_lengths.csv"):
        mass = nuclide.rstrip("ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz")
        element = periodictable.elements.symbol(nuclide[len(mass) :])
        theirs = element[int(mass)].neutron if mass else element.neutron
        values += 2
        if abs(float(length) - theirs.b_c) > 1e-6:
            faults.append(f"{nuclide}: length {length} against {theirs.b_c}")
        if abs(float(absorption) - theirs.absorption) > 1e-6 * theirs.absorption:
            faults.append(f"{nuclide}: absorption {absorption} against {theirs.absorption}")
    print(f"{values} values compared, {len(faults)} differ")
    for fault in faults:
        print(fault)
    return 1 if faults or values < 1500 else 0


if __name__ == "__main__":
    sys.exit(main(Path(sys.argv[1])))
