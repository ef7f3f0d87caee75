#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""Reads every .vtk file of a result folder with the library that defines the format and
compares it, number by number, with an independent reading: the plain text for the planes
and lattice.csv for the lattice. Argument: a program that writes a result folder to its
first argument, or an existing result folder. Exit 77 (skipped) without the library."""

import csv
import glob
import json
import math
import os
import subprocess
import sys
import tempfile

try:
    from vtkmodules.vtkIOLegacy import vtkRectilinearGridReader, vtkStructuredPointsReader
except ImportError:
    print("skipped: this Python has no vtkmodules")
    sys.exit(77)

AXES = {"electric_along": "zx", "electric_across": "xy",
        "magnetic_along": "zy", "magnetic_across": "xy",
        "electric_turned": "zr"}
failures = []
compared = 0


def check(condition, text):
    if not condition:
        failures.append(text)


def same(got, want, text):
    """Equal to the last printed digit, NaN never."""
    global compared
    compared += 1
    if not abs(got - want) <= 1e-14 * abs(want):
        failures.append(f"{text}: got {got!r}, want {want!r}")


def read(reader, path):
    reader.SetFileName(path)
    reader.ReadAllScalarsOn()
    reader.ReadAllVectorsOn()
    reader.Update()
    check(reader.GetErrorCode() == 0, f"{path}: the library reports an error")
    return reader.GetOutput()


def sections(path):
    """Own reading of the text: section head -> list of numbers."""
    found, name = {}, None
    with open(path, encoding="ascii") as file:
        lines = file.read().split("\n")
    check(lines[0] == "# vtk DataFile Version 3.0", f"{path}: first line")
    check(0 < len(lines[1]) <= 255, f"{path}: title line is too long for the format")
    check(lines[2] == "ASCII", f"{path}: third line")
    for line in lines[3:]:
        if line[:1].isalpha():
            words = line.split()
            if words[0] not in ("LOOKUP_TABLE", "POINT_DATA"):
                name = words[1] if words[0] in ("SCALARS", "VECTORS") else words[0]
                found[name] = [] if words[0] not in ("DIMENSIONS", "ORIGIN", "SPACING") \
                    else [float(w) for w in words[1:]]
        else:
            found.setdefault(name, []).extend(float(word) for word in line.split())
    return found


def compare_array(data, name, want, components, path):
    array = data.GetPointData().GetArray(name)
    check(array is not None, f"{path}: no array {name}")
    if array is None:
        return
    check(array.GetNumberOfComponents() == components, f"{path}: components of {name}")
    check(array.GetNumberOfTuples() * components == len(want), f"{path}: size of {name}")
    for k in range(array.GetNumberOfTuples()):
        for c in range(components):
            value = array.GetComponent(k, c)
            check(math.isfinite(value), f"{path}: {name} {k} is not finite")
            same(value, want[k * components + c], f"{path}: {name} {k}.{c}")


def compare_plane(path, kind):
    text = sections(path)
    data = read(vtkRectilinearGridReader(), path)
    na, nb, nc = data.GetDimensions()
    check([na, nb, nc] == text["DIMENSIONS"] and nc == 1, f"{path}: dimensions")
    for axis, array in (("X", data.GetXCoordinates()), ("Y", data.GetYCoordinates())):
        want = text[axis + "_COORDINATES"]
        for k in range(array.GetNumberOfTuples()):
            same(array.GetTuple1(k), want[k], f"{path}: {axis} {k}")
            check(k == 0 or want[k] > want[k - 1], f"{path}: {axis} {k} does not rise")
    field = "electric_field" if kind.startswith("electric") else "magnetic_flux_density"
    compare_array(data, "potential", text["potential"], 1, path)
    compare_array(data, "part", text["part"], 1, path)
    compare_array(data, field, text[field], 3, path)
    check(data.GetPointData().GetNumberOfArrays() == 3, f"{path}: number of arrays")
    with open(path, encoding="ascii") as file:
        title = file.read(400).split("\n")[1]
    a, b = AXES[kind]
    check(f"(X,Y,Z) = ({a},{b},0) in m" in title, f"{path}: axes in the title")
    return [na, nb]


def compare_lattice(path, table):
    data = read(vtkStructuredPointsReader(), path)
    with open(table, encoding="ascii", newline="") as file:
        rows = list(csv.DictReader(line for line in file if not line.startswith("#")))
    check(data.GetNumberOfPoints() == len(rows), f"{path}: number of points")
    origin, spacing, n = data.GetOrigin(), data.GetSpacing(), data.GetDimensions()
    size = max(abs(float(row[axis])) for row in rows for axis in "xyz")
    for k, row in enumerate(rows):
        index = (k % n[0], k // n[0] % n[1], k // (n[0] * n[1]))
        for axis, name in enumerate("xyz"):
            place = origin[axis] + index[axis] * spacing[axis]
            check(abs(place - float(row[name])) <= 1e-11 * size, f"{table}: row {k} {name}")
    compare_array(data, "solid", [float(row["solid"]) for row in rows], 1, path)
    for symbol, name in (("E", "electric_field"), ("B", "magnetic_flux_density")):
        if symbol + "x" in rows[0]:
            want = [float(row[symbol + axis]) for row in rows for axis in "xyz"]
            compare_array(data, name, want, 3, path)
            want = [float(row[symbol + axis + "_uncertainty"])
                    for row in rows for axis in "xyz"]
            check(all(value >= 0 for value in want), f"{table}: uncertainties of {symbol}")
            compare_array(data, name + "_uncertainty", want, 3, path)
        else:
            check(data.GetPointData().GetArray(name) is None, f"{path}: stray {name}")
            check(data.GetPointData().GetArray(name + "_uncertainty") is None,
                  f"{path}: stray uncertainty of {name}")
    check(data.GetPointData().GetNumberOfArrays() == 1 + 2 * sum(
        symbol + "x" in rows[0] for symbol in "EB"), f"{path}: number of arrays")


def compare_folder(folder):
    with open(os.path.join(folder, "summary.json"), encoding="utf-8") as file:
        summary = json.load(file)
    planes = {plane["plane"]: plane for plane in summary["planes"]}
    names = {os.path.basename(p)[:-4] for p in glob.glob(os.path.join(folder, "*.vtk"))}
    check(names - {"lattice"} == set(planes), f"planes: {names} and {set(planes)}")
    check(sorted(os.listdir(folder)) == sorted(summary["files"]), "list of files")
    for kind, plane in planes.items():
        grid = compare_plane(os.path.join(folder, kind + ".vtk"), kind)
        check(grid == plane["grid"], f"{kind}: grid of summary {plane['grid']}, map {grid}")
        check("".join(plane["axes"]) == AXES[kind], f"{kind}: axes of the summary")
    if "lattice" in names:
        compare_lattice(os.path.join(folder, "lattice.vtk"),
                        os.path.join(folder, "lattice.csv"))


def main():
    if os.path.isdir(sys.argv[1]):
        compare_folder(sys.argv[1])
    else:
        with tempfile.TemporaryDirectory() as scratch:
            folder = os.path.join(scratch, "result")
            subprocess.run([sys.argv[1], folder], check=True)
            compare_folder(folder)
    for text in failures[:20]:
        print(text)
    print(f"{compared} numbers compared, {len(failures)} failures")
    return 1 if failures or compared == 0 else 0


sys.exit(main())
