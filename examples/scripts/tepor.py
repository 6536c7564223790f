"""tepor for Python: a thin layer over libtepor with ctypes and the standard library alone.

The grammar is the library's: a body is described in a region, on a face, between two regions; parameters go in, quantities
come out. SI units, degC. The shared library is looked for in the environment variable TEPOR_LIBRARY, then by the system's
loader. What the library refuses raises tepor.Error with its full text.
"""
import ctypes
import ctypes.util
import os
from ctypes import POINTER, byref, c_char_p, c_double, c_int32, c_int64, c_size_t, c_void_p


class Value(ctypes.Structure):
    _fields_ = [("kind", c_int32), ("reserved", c_int32), ("number", c_double), ("object", c_void_p)]


class Frame(ctypes.Structure):
    _fields_ = [("kind", c_int32), ("reserved", c_int32), ("size", c_double)]


class LayerStruct(ctypes.Structure):
    _fields_ = [("region", c_char_p), ("thickness", Value), ("cells", c_int64), ("grading", c_double)]


class Points(ctypes.Structure):
    _fields_ = [("count", c_size_t), ("temperature", POINTER(c_double)), ("fluid", POINTER(c_double)),
                ("x", POINTER(c_double)), ("y", POINTER(c_double)), ("time", c_double),
                ("parameters", POINTER(c_double)), ("parameter_count", c_size_t)]


class Balance(ctypes.Structure):
    _fields_ = [("size", c_size_t)] + [(n, c_double) for n in
               ("into", "out", "generated", "stored", "left_over", "gross", "floor")] + \
               [("balanced", c_int32), ("reserved", c_int32)]

    def __str__(self):
        verdict = "balanced" if self.balanced else "NOT BALANCED"
        return (f"heat in {self.into:.6g} W, out {self.out:.6g} W, generated {self.generated:.6g} W, stored {self.stored:.6g} W; "
                f"left over {self.left_over:.1e} W (rounding {self.floor:.1e} W): {verdict}")


class MarchOptions(ctypes.Structure):
    _fields_ = [("size", c_size_t), ("theta", c_double), ("step", c_double), ("tolerance", c_double),
                ("largest_step", c_double), ("damped_start", c_int32), ("newton_passes", c_int32)]


class BracketResult(ctypes.Structure):
    _fields_ = [("size", c_size_t), ("lower", c_double), ("value", c_double), ("upper", c_double), ("cells", c_int64),
                ("unknowns", c_int64), ("reached", c_int32), ("reserved", c_int32)]


class Sized(ctypes.Structure):
    _fields_ = [("size", c_size_t), ("value", c_double), ("reached", c_double), ("failed_at", c_double),
                ("solves", c_int64), ("reason", c_int32), ("reserved", c_int32)]


LawCallback = ctypes.CFUNCTYPE(c_int32, POINTER(Points), POINTER(c_double), POINTER(c_double), c_void_p)

_lib = ctypes.CDLL(os.environ.get("TEPOR_LIBRARY") or ctypes.util.find_library("tepor") or "libtepor.so")
for _name in ("nothing", "number", "kelvin", "of", "by"):
    getattr(_lib, "tepor_" + _name).restype = Value
_lib.tepor_number.argtypes = _lib.tepor_kelvin.argtypes = [c_double]
_lib.tepor_of.argtypes = _lib.tepor_by.argtypes = [c_void_p]
for _name in ("planar", "cylindrical"):
    getattr(_lib, "tepor_" + _name).restype = Frame
    getattr(_lib, "tepor_" + _name).argtypes = [c_double]
_lib.tepor_spherical.restype = Frame
_lib.tepor_session_create.restype = c_void_p
for _name in ("version", "session_message", "session_offender", "verdict_text"):
    getattr(_lib, "tepor_" + _name).restype = c_char_p
_lib.tepor_session_message.argtypes = _lib.tepor_session_offender.argtypes = [c_void_p]
_lib.tepor_status_name.restype = c_char_p
_lib.tepor_march_time.restype = _lib.tepor_march_read.restype = c_double
_lib.tepor_march_time.argtypes = [c_void_p]
_lib.tepor_march_read.argtypes = [c_void_p, c_int64]
_lib.tepor_march_set.argtypes = [c_void_p, c_int64, c_double]
_lib.tepor_march_set.restype = None
_lib.tepor_march_advance.argtypes = [c_void_p]
_lib.tepor_march_options_default.restype = MarchOptions
for _name in ("mesh_node_count", "mesh_cell_count", "mesh_nodes_per_cell"):
    getattr(_lib, "tepor_" + _name).restype = c_size_t
    getattr(_lib, "tepor_" + _name).argtypes = [c_void_p]
_session = c_void_p(_lib.tepor_session_create())

if _lib.tepor_abi_version() != 1:
    raise ImportError("libtepor has another ABI version than this module")

ELEMENTS = {"segment 1": 11, "segment 2": 12, "segment 3": 13, "exact segment": 19, "triangle 1": 21, "triangle 2": 22,
            "triangle 3": 23, "quadrilateral 1": 31, "quadrilateral 2": 32, "quadrilateral 3": 33}


class Error(RuntimeError):
    """What the library refused: `status` is its short name, `offender` the name at fault."""

    def __init__(self, code):
        super().__init__(_lib.tepor_session_message(_session).decode())
        self.status = _lib.tepor_status_name(code).decode()
        self.offender = _lib.tepor_session_offender(_session).decode()


def _plain(argument):
    """Python arguments as ctypes ones: floats as doubles, texts encoded, handles by address."""
    if isinstance(argument, float):
        return c_double(argument)
    if isinstance(argument, str):
        return argument.encode()
    if isinstance(argument, Handle):
        return argument.handle
    return argument


def _call(name, *arguments):
    code = getattr(_lib, "tepor_" + name)(_session, *[_plain(a) for a in arguments])
    if code != 0:
        raise Error(code)


def _number(name, *arguments):
    out = c_double()
    _call(name, *arguments, byref(out))
    return out.value


class Handle:
    """Owns what a create call made."""
    free = None

    def __init__(self, create, *arguments):
        self.handle = c_void_p()
        _call(create, *arguments, byref(self.handle))

    def __del__(self):
        if getattr(self, "handle", None) and _lib:
            getattr(_lib, self.free)(self.handle)


class Parameter(Handle):
    free = "tepor_parameter_free"

    def __init__(self, name, value):
        super().__init__("parameter_create", name, float(value))
        self.name = name


class Function(Handle):
    free = "tepor_function_free"


def _array(numbers):
    if hasattr(numbers, "ctypes"):  # a numpy array is passed as it lies
        return numbers.ctypes.data_as(POINTER(c_double))
    return (c_double * len(numbers))(*numbers)


def table(points, hold=False):
    """A property over temperature: table([(200, 1.10), (800, 1.35)])."""
    at, value = zip(*points)
    return Function("table_create", _array([float(t) for t in at]), _array([float(v) for v in value]), c_size_t(len(at)),
                    c_int32(hold))


def schedule(entries, ramps=False):
    """A value over time: schedule([(0, 500), (600, 0)])."""
    at, value = zip(*entries)
    return Function("schedule_create", _array([float(t) for t in at]), _array([float(v) for v in value]),
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

    callback = LawCallback(batch)
    handles = (c_void_p * max(1, len(parameters)))(*[p.handle for p in parameters])
    made = Function("law_create", name, callback, None, handles, c_size_t(len(parameters)), c_int32(not of_place), c_int32(0))
    _kept.append((callback, parameters))  # a body may use them as long as the program runs
    return made


_kept = []


def _value(v):
    if v is None:
        return _lib.tepor_nothing()
    if isinstance(v, Parameter):
        _kept.append(v)
        return _lib.tepor_of(v.handle)
    if isinstance(v, Function):
        return _lib.tepor_by(v.handle)
    return _lib.tepor_number(float(v))


def planar(size=1.0):
    return _lib.tepor_planar(size)


def cylindrical(length=1.0):
    return _lib.tepor_cylindrical(length)


def spherical():
    return _lib.tepor_spherical()


class Mesh(Handle):
    free = "tepor_mesh_free"


def layers(stack, frame=None, start=0.0, element="segment 2"):
    """A 1D stack: [(region, thickness, cells), ...] with faces "inner" and "outer"."""
    structs = (LayerStruct * len(stack))(*[LayerStruct(r.encode(), _value(t), n, 0.0) for r, t, n in stack])
    return Mesh("layers_create", c_int32(ELEMENTS[element]), structs, c_size_t(len(stack)), frame or planar(), _value(start))


class Tiles(Handle):
    """Rectangles on grid lines."""
    free = "tepor_tiles_free"

    def __init__(self):
        super().__init__("tiles_create")

    def add(self, region, corner, opposite):
        _call("tiles_add", self, region, *map(float, (*corner, *opposite)))

    def cut(self, corner, opposite, face=""):
        _call("tiles_cut", self, *map(float, (*corner, *opposite)), face)

    def face(self, name, start, end):
        _call("tiles_face", self, name, *map(float, (*start, *end)))

    def mesh(self, size, frame=None, element="quadrilateral 2"):
        return Mesh("tiles_mesh", self, c_int32(ELEMENTS[element]), float(size), frame or planar())


class Section(Handle):
    """A drawing of shapes, painted one over the other."""
    free = "tepor_section_free"

    def __init__(self):
        super().__init__("section_create")

    def rectangle(self, region, corner, opposite):
        _call("section_add_rectangle", self, region, *map(float, (*corner, *opposite)))

    def circle(self, region, centre, radius):
        _call("section_add_circle", self, region, *map(float, (*centre, radius)))

    def cut_circle(self, face, centre, radius):
        _call("section_cut_circle", self, face, *map(float, (*centre, radius)))

    def face(self, name, start, end):
        _call("section_face", self, name, *map(float, (*start, *end)))

    def rest(self, name):
        _call("section_rest", self, name)

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


class Field(Handle):
    free = "tepor_field_free"

    def __getitem__(self, quantity):
        return _number("field_value", self, quantity)

    def balance(self):
        out = Balance(size=ctypes.sizeof(Balance))
        _call("field_balance", self, byref(out))
        return out

    def slopes(self, quantity, *parameters):
        """Derivatives of a quantity by parameters: one extra solve for all."""
        handles = (c_void_p * len(parameters))(*[p.handle for p in parameters])
        out = (c_double * len(parameters))()
        _call("gradient", self, quantity, handles, c_size_t(len(parameters)), out)
        return list(out)


class Body(Handle):
    free = "tepor_body_free"

    def __init__(self, mesh, kelvin=False):
        super().__init__("body_create", mesh, c_int32(kelvin))

    def material(self, region, conductivity, density=None, specific_heat=None):
        _call("body_in_material", self, region, _value(conductivity), _value(density), _value(specific_heat))

    def generation(self, region, per_volume=None, total=None):
        if (per_volume is None) == (total is None):
            raise ValueError("generation: give either per_volume [W/m3] or total [W]")
        kind = "per_volume" if total is None else "total"
        _call("body_in_generation_" + kind, self, region, _value(per_volume if total is None else total))

    def side_film(self, region, coefficient, fluid, perimeter=None, thickness=None, wet_sides=2):
        if perimeter is not None:
            _call("body_in_side_film_bar", self, region, _value(coefficient), _value(fluid), _value(perimeter))
        else:
            _call("body_in_side_film_plate", self, region, _value(coefficient), _value(fluid), _value(thickness), c_int32(wet_sides))

    def film(self, face, coefficient, fluid):
        _call("body_on_film", self, face, _value(coefficient), _value(fluid))

    def radiation(self, face, emissivity, surroundings):
        _call("body_on_radiation", self, face, _value(emissivity), _value(surroundings))

    def flux_into(self, face, flux):
        _call("body_on_flux_into", self, face, _value(flux))

    def fixed_temperature(self, face, temperature):
        _call("body_on_fixed_temperature", self, face, _value(temperature))

    def contact(self, region, other, conductance):
        _call("body_between_conductance", self, region, other, _value(conductance))

    def set(self, parameter, value):
        _call("body_set", self, parameter, float(value))

    def steady(self):
        return Field("steady", self)

    def bracket(self, quantity, relative_width=0.01, max_unknowns=200000, max_seconds=60.0):
        out = BracketResult(size=ctypes.sizeof(BracketResult))
        _call("bracket", self, quantity, float(relative_width), c_int64(max_unknowns), float(max_seconds), byref(out))
        return out

    def size_for(self, parameter, quantity, target, kind="equal to", between=(0.0, 0.0)):
        """The value of a parameter that meets a target; raises when there is none, with the reason in words."""
        out = Sized(size=ctypes.sizeof(Sized))
        _call("size_for", self, parameter, quantity, c_int32(("equal to", "at most", "at least").index(kind)), float(target),
              float(between[0]), float(between[1]), byref(out))
        if out.reason > 1:
            raise ValueError(_lib.tepor_session_message(_session).decode())
        return out

    def march(self, initial, step=0.0, theta=0.5, tolerance=0.01):
        return March(self, initial, step, theta, tolerance)


class March(Handle):
    free = "tepor_march_free"

    def __init__(self, body, initial, step, theta, tolerance):
        options = _lib.tepor_march_options_default()
        options.step, options.theta, options.tolerance = step, theta, tolerance
        if isinstance(initial, Field):
            super().__init__("march_create_from", body, initial, byref(options))
        else:
            super().__init__("march_create", body, float(initial), byref(options))

    def watch(self, quantity):
        out = c_int64()
        _call("march_watch", self, quantity, byref(out))
        return out.value

    def drive(self, parameter):
        out = c_int64()
        _call("march_drive", self, parameter, byref(out))
        return out.value

    def set(self, handle, value):
        _lib.tepor_march_set(self.handle, handle, value)

    def read(self, probe):
        return _lib.tepor_march_read(self.handle, probe)

    def advance(self):
        verdict = _lib.tepor_march_advance(self.handle)
        if verdict > 1:
            raise RuntimeError(_lib.tepor_verdict_text(verdict).decode())

    def advance_to(self, time):
        _call("march_advance_to", self, float(time))

    def time_to_reach(self, quantity, value, latest=0.0):
        return _number("march_time_to_reach", self, quantity, float(value), float(latest))

    @property
    def time(self):
        return _lib.tepor_march_time(self.handle)

    def __getitem__(self, quantity):
        return _number("march_value", self, quantity)

    def balance(self):
        out = Balance(size=ctypes.sizeof(Balance))
        _call("march_balance", self, byref(out))
        return out


CAUTION_TOUCH = "Caution: whether a surface may be touched is decided by local rules and licensed practice, not by this number."
CAUTION_FIRE = "Caution: cable ratings and fire safety are decided by codes and licensed practice, not by this number."
