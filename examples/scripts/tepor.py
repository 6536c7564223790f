"""tepor for Python: a thin layer over libtepor with ctypes and the standard library alone.

The grammar is the library's: a body is described in a region, on a face, between two regions; parameters go in, quantities
come out. SI units, degC. The shared library is looked for in the environment variable TEPOR_LIBRARY, then by the system's
loader. What the library refuses raises tepor.Error with its full text. Arrays come as ctypes arrays; numpy reads and writes
them in place (numpy.frombuffer), and its arrays are taken as they lie.
"""
import ctypes
import math
from ctypes import POINTER, byref, c_double, c_int32, c_int64, c_size_t, c_void_p

import tepor_ctypes as c
from tepor_ctypes import ELEMENTS, Error, Handle, array, call, filled, handles, lib, session, taken, text
from tepor_results import Field, Fitted, March, Model


def version():
    return lib.tepor_version().decode()


class Parameter(Handle):
    free = "tepor_parameter_free"

    def __init__(self, name, value):
        super().__init__("parameter_create", name, float(value))
        self.name = name


class Function(Handle):
    free = "tepor_function_free"


def table(points, hold=False):
    """A property over temperature: table([(200, 1.10), (800, 1.35)])."""
    at, value = zip(*points)
    return Function("table_create", array([float(t) for t in at]), array([float(v) for v in value]), c_size_t(len(at)),
                    c_int32(hold))


def schedule(entries, ramps=False):
    """A value over time: schedule([(0, 500), (600, 0)])."""
    at, value = zip(*entries)
    return Function("schedule_create", array([float(t) for t in at]), array([float(v) for v in value]),
                    c_size_t(len(at)), c_int32(ramps))


class _Spot:
    pass


def law(function, parameters=(), name="own law", of_place=False):
    """An own law: function(spot, *parameters) -> number, spot with temperature, fluid, x, y and time."""
    failure = []

    def batch(points, value, slope, user_data):
        p = points.contents
        spot = _Spot()
        spot.time = p.time
        given = [p.parameters[j] for j in range(p.parameter_count)]
        try:
            for i in range(p.count):
                spot.x, spot.y = p.x[i], p.y[i]
                spot.temperature = p.temperature[i] if p.temperature else None
                spot.fluid = p.fluid[i] if p.fluid else None
                value[i] = function(spot, *given)
        except Exception as error:  # no exception may cross the border
            failure.append(error)
            return 1
        return 0

    callback = c.LawCallback(batch)
    made = Function("law_create", name, callback, None, handles(parameters), c_size_t(len(parameters)),
                    c_int32(not of_place), c_int32(0))
    _kept.append((callback, parameters))  # a body may use them as long as the program runs
    return made


_kept = []


def _value(v):
    if v is None:
        return lib.tepor_nothing()
    if isinstance(v, Parameter):
        _kept.append(v)
        return lib.tepor_of(v.handle)
    if isinstance(v, Function):
        return lib.tepor_by(v.handle)
    return lib.tepor_number(float(v))


def planar(size=1.0):
    return lib.tepor_planar(size)


def cylindrical(length=1.0):
    return lib.tepor_cylindrical(length)


def spherical():
    return lib.tepor_spherical()


class Mesh(Handle):
    free = "tepor_mesh_free"

    def node_count(self):
        return lib.tepor_mesh_node_count(self.handle)

    def places(self):
        """x and y of every node in turn [m]."""
        return filled("mesh_places", self, 2 * self.node_count())


def mesh_from_arrays(element, places, cells, nodes_per_cell, faces, frame=None):
    """Nodes and cells of one's own; faces {name: [(cell, side), ...]}; everything is the region "body"."""
    names = (ctypes.c_char_p * len(faces))(*[f.encode() for f in faces])
    flat = [n for side in faces.values() for pair in side for n in pair]
    of_side = [f for f, side in enumerate(faces.values()) for _ in side]
    numbers = (array(places), array(cells, c_int32), array(of_side, c_int32), array(flat, c_int32))
    given = c.Arrays(ctypes.sizeof(c.Arrays), ctypes.cast(numbers[0], POINTER(c_double)), len(places) // 2,
                     ctypes.cast(numbers[1], POINTER(c_int32)), len(cells) // nodes_per_cell, None, None, 0, names,
                     ctypes.cast(numbers[2], POINTER(c_int32)), ctypes.cast(numbers[3], POINTER(c_int32)), len(faces),
                     len(of_side))
    return Mesh("mesh_from_arrays", c_int32(ELEMENTS[element]), byref(given), frame or planar())


def layers(stack, frame=None, start=0.0, element="segment 2"):
    """A 1D stack: [(region, thickness, cells), ...] with faces "inner" and "outer"."""
    structs = (c.Layer * len(stack))(*[c.Layer(r.encode(), _value(t), n, 0.0) for r, t, n in stack])
    return Mesh("layers_create", c_int32(ELEMENTS[element]), structs, c_size_t(len(stack)), frame or planar(), _value(start))


class Tiles(Handle):
    """Rectangles on grid lines."""
    free = "tepor_tiles_free"

    def __init__(self):
        super().__init__("tiles_create")

    def add(self, region, corner, opposite):
        call("tiles_add", self, region, *map(float, (*corner, *opposite)))

    def cut(self, corner, opposite, face=""):
        call("tiles_cut", self, *map(float, (*corner, *opposite)), face)

    def face(self, name, start, end):
        call("tiles_face", self, name, *map(float, (*start, *end)))

    def mesh(self, size, frame=None, element="quadrilateral 2"):
        return Mesh("tiles_mesh", self, c_int32(ELEMENTS[element]), float(size), frame or planar())


class Section(Handle):
    """A drawing of shapes, painted one over the other."""
    free = "tepor_section_free"

    def __init__(self):
        super().__init__("section_create")

    def rectangle(self, region, corner, opposite):
        call("section_add_rectangle", self, region, *map(float, (*corner, *opposite)))

    def circle(self, region, centre, radius):
        call("section_add_circle", self, region, *map(float, (*centre, radius)))

    def cut_circle(self, face, centre, radius):
        call("section_cut_circle", self, face, *map(float, (*centre, radius)))

    def face(self, name, start, end):
        call("section_face", self, name, *map(float, (*start, *end)))

    def rest(self, name):
        call("section_rest", self, name)

    def mesh(self, size, frame=None, element="triangle 2"):
        return Mesh("section_mesh", self, c_int32(ELEMENTS[element]), float(size), frame or planar())


class Quantity(Handle):
    free = "tepor_quantity_free"


def at(x, y=0.0, region=""):
    return Quantity("quantity_at", float(x), float(y), region)


def _asked(name):
    return lambda *names: Quantity("quantity_" + name, *names)


mean_in, mean_on = _asked("mean_in"), _asked("mean_on")
hottest_in, coldest_in = _asked("hottest_in"), _asked("coldest_in")
hottest_on, coldest_on = _asked("hottest_on"), _asked("coldest_on")
heat_out_through, heat_in_through = _asked("heat_out_through"), _asked("heat_in_through")
heat_from, generated_in = _asked("heat_from"), _asked("generated_in")
conductance_between = _asked("conductance_between")


class Body(Handle):
    free = "tepor_body_free"

    def __init__(self, mesh, kelvin=False):
        super().__init__("body_create", mesh, c_int32(kelvin))

    def _say(self, how, kind, *arguments):
        """`how`: "" says it, "also" adds another of the kind, "replace" takes back what was said."""
        call("body_" + (how and how + "_") + kind, self, *arguments)

    def material(self, region, conductivity, density=None, specific_heat=None, how=""):
        self._say(how, "in_material", region, _value(conductivity), _value(density), _value(specific_heat))

    def generation(self, region, per_volume=None, total=None, how=""):
        if (per_volume is None) == (total is None):
            raise ValueError("generation: give either per_volume [W/m3] or total [W]")
        kind = "per_volume" if total is None else "total"
        self._say(how, "in_generation_" + kind, region, _value(per_volume if total is None else total))

    def side_film(self, region, coefficient, fluid, perimeter=None, thickness=None, wet_sides=2, how=""):
        if perimeter is not None:
            self._say(how, "in_side_film_bar", region, _value(coefficient), _value(fluid), _value(perimeter))
        else:
            self._say(how, "in_side_film_plate", region, _value(coefficient), _value(fluid), _value(thickness),
                      c_int32(wet_sides))

    def film(self, face, coefficient, fluid, how=""):
        self._say(how, "on_film", face, _value(coefficient), _value(fluid))

    def radiation(self, face, emissivity, surroundings, how=""):
        self._say(how, "on_radiation", face, _value(emissivity), _value(surroundings))

    def flux_into(self, face, flux, how=""):
        self._say(how, "on_flux_into", face, _value(flux))

    def fixed_temperature(self, face, temperature, how=""):
        self._say(how, "on_fixed_temperature", face, _value(temperature))

    def contact(self, region, other, conductance, how=""):
        self._say(how, "between_conductance", region, other, _value(conductance))

    def text(self):
        return text("body_text", self).decode()

    def report(self, field, *quantities):
        """Description, temperatures, balance, quantities and cautions."""
        return text("report", self, field, handles(quantities), c_size_t(len(quantities))).decode()

    def set(self, parameter, value):
        call("body_set", self, parameter, float(value))

    def steady(self):
        return Field("steady", self)

    def bracket(self, quantity, relative_width=0.01, max_unknowns=200000, max_seconds=60.0):
        options, out = lib.tepor_bracket_options_default(), c.BracketResult()
        options.relative_width, options.max_unknowns, options.max_seconds = relative_width, max_unknowns, max_seconds
        call("bracket", self, quantity, byref(options), byref(out))
        return out

    def size_for(self, parameter, quantity, target, kind="equal to", between=None):
        """The value of a parameter that meets a target; raises when there is none, with the reason in words."""
        options, out = lib.tepor_size_options_default(), c.Sized()
        if between:
            options.start, options.stop = between
        call("size_for", self, parameter, quantity, c_int32(("equal to", "at most", "at least").index(kind)), float(target),
              byref(options), byref(out), None)
        if out.reason > 1:
            raise ValueError(lib.tepor_session_message(session).decode())
        return out

    def fit(self, parameters, readings):
        """Parameters from readings [(quantity, value, standard uncertainty[, {parameter: value while it was read}]), ...];
        parameters [p, (p, prior, uncertainty of the prior), ...]."""
        by = [p if isinstance(p, tuple) else (p, 0.0, 0.0) for p in parameters]
        by = (c.FitBy * len(by))(*[c.FitBy(p.handle, math.nan, math.nan, at, by_how_much) for p, at, by_how_much in by])
        rows, kept = [], []
        for quantity, value, uncertainty, *under in readings:
            held = [c.Condition(p.handle, v) for p, v in (under[0] if under else {}).items()]
            kept.append((c.Condition * max(1, len(held)))(*held))
            rows.append(c.Reading(quantity.handle, 0.0, value, uncertainty, ctypes.cast(kept[-1], c_void_p), len(held)))
        return Fitted("fit", self, by, c_size_t(len(by)), (c.Reading * len(rows))(*rows), c_size_t(len(rows)), None)

    def compact(self, inputs, outputs, sample_time, tolerance=1e-3):
        """A small linear model for control, around the steady state at the present values."""
        options, ins, outs = lib.tepor_compact_options_default(), handles(inputs), handles(outputs)
        options.inputs, options.input_count = ctypes.cast(ins, c_void_p), len(inputs)
        options.outputs, options.output_count = ctypes.cast(outs, c_void_p), len(outputs)
        options.sample_time, options.tolerance = sample_time, tolerance
        return Model("compact", self, byref(options))

    def march(self, initial, step=0.0, theta=0.5, tolerance=0.01):
        return March(self, initial, step, theta, tolerance)


def self_check():
    """The library's verified cases in this build: facts, and the table."""
    out, table_of_cases = c.SelfCheck(), c_void_p()
    call("self_check", byref(out), byref(table_of_cases))
    return out, taken(table_of_cases).decode()


CAUTION_TOUCH = "Caution: whether a surface may be touched is decided by local rules and licensed practice, not by this number."
CAUTION_FIRE = "Caution: cable ratings and fire safety are decided by codes and licensed practice, not by this number."
