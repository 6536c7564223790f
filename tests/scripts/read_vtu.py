"""VTU files read back with the VTK of the distribution: cells of every element order give, through VTK's own shape functions,
the places and temperatures the library gives; regions, heat fluxes, time values, and the index of a series."""
import csv
import ctypes
import sys
import tempfile
from pathlib import Path

from vtkmodules.vtkIOXML import vtkXMLUnstructuredGridReader
from vtkmodules.vtkCommonCore import mutable

sys.path.insert(0, str(Path(__file__).resolve().parents[2] / "examples" / "scripts"))
import tepor  # noqa: E402
import tepor_ctypes as c  # noqa: E402

failures = 0
folder = Path(tempfile.mkdtemp())


def expect(what, holds, told=""):
    global failures
    failures += not holds
    if not holds:
        print("FAIL", what, told)


def read(path):
    reader = vtkXMLUnstructuredGridReader()
    reader.SetFileName(str(path))
    reader.Update()
    return reader.GetOutput()


def place(p):  # a body that is curved in x, so that no order of elements is exact by accident
    return 20.0 + 300.0 * p.x + 900.0 * p.x * p.y


def body_of(element):
    if element.startswith("segment"):
        mesh = tepor.layers([("left", 0.2, 3), ("right, \"thick\"", 0.3, 2)], element=element)
        names, faces = ("left", "right, \"thick\""), ("inner", "outer")
    elif element.startswith("triangle"):
        drawing = tepor.Section()  # sides on an arc: cells of order 2 and 3 are curved
        drawing.rectangle("left", (0.0, 0.0), (0.4, 0.4))
        drawing.circle("right, \"thick\"", (0.4, 0.2), 0.15)
        drawing.face("inner", (0.0, 0.4), (0.0, 0.0))
        drawing.rest("outer")
        mesh = drawing.mesh(size=0.1, element=element)
        names, faces = ("left", "right, \"thick\""), ("inner", "outer")
    else:
        drawing = tepor.Tiles()
        drawing.add("left", (0.0, 0.0), (0.2, 0.3))
        drawing.add("right, \"thick\"", (0.2, 0.0), (0.5, 0.3))
        mesh = drawing.mesh(size=0.1, element=element)
        names, faces = ("left", "right, \"thick\""), ("left", "right")
    body = tepor.Body(mesh)
    body.material(names[0], 3.0, density=2000.0, specific_heat=800.0)
    body.material(names[1], 40.0, density=2000.0, specific_heat=800.0)
    body.generation(names[0], per_volume=tepor.law(place, of_place=True, name="place"))
    body.film(faces[0], 30.0, 200.0)
    body.film(faces[1], 15.0, 20.0)
    return mesh, body, names


CELL_TYPES = {"segment 1": 3, "segment 2": 21, "segment 3": 68, "triangle 1": 5, "triangle 2": 22, "triangle 3": 69,
              "quadrilateral 1": 9, "quadrilateral 2": 28, "quadrilateral 3": 70}
for element, cell_type in CELL_TYPES.items():
    for joint in (False, True):
        mesh, body, names = body_of(element)
        if joint:
            body.contact(*names, 50.0)
        field = body.steady()
        path = folder / "one.vtu"
        path.write_bytes(field.vtu())
        grid = read(path)
        what = element + (" with a joint" if joint else "")
        cells = c.lib.tepor_mesh_cell_count(mesh.handle)
        expect(f"{what}: cells", grid.GetNumberOfCells() == cells, (grid.GetNumberOfCells(), cells))
        more = grid.GetNumberOfPoints() - mesh.node_count()
        expect(f"{what}: points, {more} more than nodes", (more > 0) == joint)
        temperature = grid.GetPointData().GetArray("temperature [degC]")
        region = grid.GetCellData().GetArray("region")
        flux = grid.GetCellData().GetArray("heat flux [W/m2]")
        known = [grid.GetFieldData().GetAbstractArray("region names").GetValue(i) for i in range(2)]
        expect(f"{what}: region names", known == list(names), known)
        expect(f"{what}: time value", grid.GetFieldData().GetArray("TimeValue").GetValue(0) == 0.0)
        expected_flux = c.filled("field_cell_heat_fluxes", field, 2 * cells)
        worst_T = worst_q = 0.0
        kinds, seen = set(), set()
        for i in range(cells):
            cell = grid.GetCell(i)
            kinds.add(grid.GetCellType(i))
            seen.add(region.GetValue(i))
            name = names[region.GetValue(i)]
            weights = [0.0] * cell.GetNumberOfPoints()
            for r, s in ((0.2, 0.3), (0.6, 0.1), (0.15, 0.7)):
                sub, x = mutable(0), [0.0, 0.0, 0.0]
                cell.EvaluateLocation(sub, (r, s, 0.0), x, weights)
                T = sum(w * temperature.GetValue(cell.GetPointId(j)) for j, w in enumerate(weights))
                out = ctypes.c_double()
                c.call("field_at", field, float(x[0]), float(x[1]), name, ctypes.byref(out))
                worst_T = max(worst_T, abs(T - out.value))
            worst_q = max(worst_q, abs(flux.GetComponent(i, 0) - expected_flux[2 * i]),
                          abs(flux.GetComponent(i, 1) - expected_flux[2 * i + 1]), abs(flux.GetComponent(i, 2)))
        expect(f"{what}: cell type", kinds == {cell_type}, kinds)
        expect(f"{what}: both regions", seen == {0, 1}, seen)
        expect(f"{what}: temperatures inside cells [K]", worst_T <= 2e-9, worst_T)
        expect(f"{what}: heat fluxes [W/m2]", worst_q == 0.0, worst_q)
        print(f"{what:28s} {cells:4d} cells, temperatures to {worst_T:.1e} K")

# a series: the time in each file, and the index
mesh, body, names = body_of("quadrilateral 2")
march = body.march(20.0, step=60.0)


class Series(c.Handle):
    free = "tepor_series_free"


class Snapshot(c.Handle):
    free = "tepor_field_free"


series = Series("series_create", str(folder / "warm up"))
for time in (0.0, 300.0, 900.0):
    march.advance_to(time)
    c.call("series_add", series, Snapshot("march_field", march))
rows = list(csv.reader(open(folder / "warm up.csv", newline="")))
expect("series: header", rows[0] == ["time [s]", "file"], rows[0])
expect("series: three files", [r[1] for r in rows[1:]] == [f"warm up_{i:04}.vtu" for i in range(3)], rows)
for time, name in rows[1:]:
    grid = read(folder / name)
    told = grid.GetFieldData().GetArray("TimeValue").GetValue(0)
    expect(f"series: time of {name}", told == float(time), (told, time))
    low, high = grid.GetPointData().GetArray("temperature [degC]").GetRange()
    expect(f"series: {name} is another state than the start", (high > low) == (float(time) > 0.0), (low, high))
print(f"series of {len(rows) - 1} files")
raise SystemExit(1 if failures else 0)
