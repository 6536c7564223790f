"""The Python module over the shared library: what it refuses, laws that fail, arrays with and without numpy, texts and pictures."""
import ctypes
import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[2] / "examples" / "scripts"))
import tepor  # noqa: E402

failures = 0


def expect(what, holds, told=""):
    global failures
    failures += not holds
    print("ok  " if holds else "FAIL", what, "" if holds else told)


def refused(what, call, kind, *words):
    try:
        call()
    except kind as error:
        text = f"{getattr(error, 'status', '')}: {error}"
        expect(what, all(word in text for word in words), text)
    else:
        expect(what, False, "it was accepted")


def slab(k=2.0):
    body = tepor.Body(tepor.layers([("slab", 0.5, 4)]))
    body.material("slab", k)
    return body


body = slab()
refused("an unknown region is named", lambda: body.material("slap", 1.0), tepor.Error, "bad_name", '"slap"', '"slab"')
refused("nothing sets the level", body.steady, tepor.Error, "no_level")
refused("a second film", lambda: (body.film("outer", 5.0, 20.0), body.film("outer", 5.0, 20.0)), tepor.Error, "contradiction")
body.film("outer", 5.0, 20.0, how="also")
body.flux_into("inner", 100.0)
expect("also adds", abs(body.steady()[tepor.mean_on("outer")] - 30.0) < 1e-9)
body.film("outer", 20.0, 20.0, how="replace")
expect("replace takes back", abs(body.steady()[tepor.mean_on("outer")] - 25.0) < 1e-9)
refused("generation both ways", lambda: body.generation("slab", per_volume=1.0, total=1.0), ValueError, "either")


def failing(spot):
    raise KeyError("no such table")


heated = slab()
heated.generation("slab", per_volume=tepor.law(failing, name="failing law"))
heated.fixed_temperature("outer", 0.0)
refused("an exception in a law stops the solve by name", heated.steady, tepor.Error, "bad_law", "failing law")

heated = slab()
heated.generation("slab", per_volume=tepor.law(lambda s: float("nan"), of_place=True, name="empty law"))
heated.fixed_temperature("outer", 0.0)
refused("a law that gives no number is named", heated.steady, tepor.Error, "bad_law", "empty law")

k, h = tepor.Parameter("k", 1.0), tepor.Parameter("h", 10.0)
plate = tepor.Body(tepor.layers([("plate", 0.1, 2)]))
plate.material("plate", k)
plate.flux_into("inner", 100.0)
plate.film("outer", h, 0.0)
refused("what one reading does not tell apart", lambda: plate.fit([k, h], [(tepor.at(0.0), 25.0, 0.1)]), tepor.Error, "no_answer",
        "k", "h")
refused("what no value reaches", lambda: plate.size_for(h, tepor.mean_on("outer"), 500.0, between=(1.0, 20.0)), ValueError, "100")

places, cells = [0.0, 0.0, 1.0, 0.0, 1.0, 1.0, 0.0, 1.0], [0, 1, 2, 3]
faces = {"cold": [(0, 3)], "warm": [(0, 1)]}


def square(places, cells):
    mesh = tepor.mesh_from_arrays("quadrilateral 1", places, cells, 4, faces)
    made = tepor.Body(mesh)
    made.material("body", 3.0)
    made.fixed_temperature("cold", 0.0)
    made.fixed_temperature("warm", 100.0)
    return mesh, made.steady()


mesh, field = square(places, cells)
expect("a mesh from lists", abs(field[tepor.heat_out_through("cold")] - 300.0) < 1e-9)
refused("a cell turned round", lambda: square(places, [0, 3, 2, 1]), tepor.Error, "bad_mesh", "counter-clockwise")
try:
    import numpy
except ImportError:
    print("skipped: numpy is not installed, its arrays are not tried")
else:
    mesh, field = square(numpy.array(places), numpy.array(cells, dtype=numpy.int32))
    temperatures = field.temperatures(mesh)
    view = numpy.frombuffer(temperatures)
    expect("numpy reads temperatures where they lie", view.ctypes.data == ctypes.addressof(temperatures) and
           abs(view.sum() - 200.0) < 1e-9)
    expect("numpy reads places", numpy.array_equal(numpy.frombuffer(mesh.places()), places))
    refused("an array of another kind", lambda: square(numpy.array(places, dtype=numpy.float32), cells), TypeError, "float64")
    refused("an array that does not lie in one piece", lambda: square(numpy.zeros(16)[::2], cells), TypeError, "contiguous")

report = plate.report(plate.steady(), tepor.mean_on("outer"))
expect("a report", all(words in report for words in ("Quantities", "balanced", "Cautions", "conductivity")), report)
expect("a profile", plate.steady().svg("profile", "A plate").startswith(b"<svg"))
refused("a map of a wall", lambda: plate.steady().svg("map"), tepor.Error, "wrong_dimension", "profile_svg")
expect("a version", tepor.version().count(".") == 2)
raise SystemExit(1 if failures else 0)
