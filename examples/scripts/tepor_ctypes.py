"""The structs of the C interface and how its calls are made, for tepor.py."""
import ctypes
import ctypes.util
import os
from ctypes import POINTER, c_char_p, c_double, c_int32, c_int64, c_size_t, c_void_p


class Value(ctypes.Structure):
    _fields_ = [("kind", c_int32), ("reserved", c_int32), ("number", c_double), ("object", c_void_p)]


class Frame(ctypes.Structure):
    _fields_ = [("kind", c_int32), ("reserved", c_int32), ("size", c_double)]


class Layer(ctypes.Structure):
    _fields_ = [("region", c_char_p), ("thickness", Value), ("cells", c_int64), ("grading", c_double)]


class Points(ctypes.Structure):
    _fields_ = [("count", c_size_t), ("temperature", POINTER(c_double)), ("fluid", POINTER(c_double)),
                ("x", POINTER(c_double)), ("y", POINTER(c_double)), ("time", c_double),
                ("parameters", POINTER(c_double)), ("parameter_count", c_size_t)]


class Arrays(ctypes.Structure):
    _fields_ = [("size", c_size_t), ("places", POINTER(c_double)), ("node_count", c_size_t), ("cells", POINTER(c_int32)),
                ("cell_count", c_size_t), ("region_of_cell", POINTER(c_int32)), ("region_names", POINTER(c_char_p)),
                ("region_count", c_size_t), ("face_names", POINTER(c_char_p)), ("face_of_side", POINTER(c_int32)),
                ("sides", POINTER(c_int32)), ("face_count", c_size_t), ("side_count", c_size_t)]


class Grown(ctypes.Structure):
    """A struct that leads with its size."""

    def __init__(self, **given):
        super().__init__(size=ctypes.sizeof(self), **given)


def grown(name, doubles="", integers=""):
    """A struct that leads with its size: numbers of 8 bytes, then of 4; words that end in * are of 64 bits."""
    fields = [("size", c_size_t)] + [(n.rstrip("*"), c_int64 if n.endswith("*") else c_double) for n in doubles.split()]
    return type(name, (Grown,), {"_fields_": fields + [(n, c_int32) for n in integers.split()]})


Balance = grown("Balance", "into out generated stored left_over gross floor", "balanced reserved")
BracketOptions = grown("BracketOptions", "relative_width absolute_width max_seconds max_unknowns*")
BracketResult = grown("BracketResult", "lower value upper cells* unknowns*", "reached passes")
Estimated = grown("Estimated", "value uncertainty low high")
Agreement = grown("Agreement", "chi_square goodness degrees_of_freedom* passes* on_bounds*")
ModelFacts = grown("ModelFacts", "order* inputs* outputs* sample_time peak_gain error_bound basis_error basis_size* factorisations*",
                   "linearised reserved")
SelfCheck = grown("SelfCheck", "cases* rows* failed*", "passed fast_math")


class SizeOptions(Grown):
    _fields_ = [("size", c_size_t)] + [(n, c_double) for n in ("start", "stop", "tolerance", "certified_width")] + \
               [("scan", c_int32), ("certified_side", c_int32), ("most_solves", c_int64)]


class Sized(Grown):
    _fields_ = [("size", c_size_t), ("value", c_double), ("reached", c_double), ("failed_at", c_double), ("solves", c_int64),
                ("reason", c_int32), ("answer_count", c_int32), ("lower", c_double), ("upper", c_double),
                ("answers", c_double * 8)]


class Slope(Grown):
    _fields_ = [("size", c_size_t), ("parameter", c_char_p), ("value", c_double), ("derivative", c_double),
                ("relative", c_double)]


class MarchOptions(Grown):
    _fields_ = [("size", c_size_t), ("theta", c_double), ("step", c_double), ("tolerance", c_double),
                ("largest_step", c_double), ("damped_start", c_int32), ("newton_passes", c_int32), ("first_step", c_double),
                ("smallest_step", c_double), ("newton_tolerance", c_double), ("capacity", c_int32), ("liquid", c_int32)]


class Reading(ctypes.Structure):
    _fields_ = [("quantity", c_void_p), ("time", c_double), ("value", c_double), ("uncertainty", c_double),
                ("conditions", c_void_p), ("condition_count", c_size_t)]


class Condition(ctypes.Structure):
    _fields_ = [("parameter", c_void_p), ("value", c_double)]


class FitBy(ctypes.Structure):
    _fields_ = [("parameter", c_void_p), ("start", c_double), ("stop", c_double), ("prior", c_double),
                ("prior_uncertainty", c_double)]


class CompactOptions(Grown):
    _fields_ = [("size", c_size_t), ("inputs", c_void_p), ("input_count", c_size_t), ("outputs", c_void_p),
                ("output_count", c_size_t), ("sample_time", c_double), ("tolerance", c_double),
                ("highest_frequency", c_double), ("input_scale", c_void_p), ("output_scale", c_void_p), ("order", c_int64),
                ("passive", c_int32), ("capacity", c_int32)]


class PictureOptions(Grown):
    _fields_ = [("size", c_size_t), ("width", c_double), ("height", c_double), ("title", c_char_p), ("isotherms", c_int32),
                ("arrows", c_int32)]


LawCallback = ctypes.CFUNCTYPE(c_int32, POINTER(Points), POINTER(c_double), POINTER(c_double), c_void_p)

ELEMENTS = {"segment 1": 11, "segment 2": 12, "segment 3": 13, "exact segment": 19, "triangle 1": 21, "triangle 2": 22,
            "triangle 3": 23, "quadrilateral 1": 31, "quadrilateral 2": 32, "quadrilateral 3": 33}

lib = ctypes.CDLL(os.environ.get("TEPOR_LIBRARY") or ctypes.util.find_library("tepor") or "libtepor.so")


def _typed(result, arguments, *names):
    for name in names:
        call = getattr(lib, "tepor_" + name)
        call.restype = result
        if arguments is not None:
            call.argtypes = arguments


# Calls that answer with a status take their arguments as plain() below makes them; the others are typed here.
_typed(Value, [], "nothing")
_typed(Value, [c_double], "number", "kelvin")
_typed(Value, [c_void_p], "of", "by")
_typed(Frame, [c_double], "planar", "cylindrical")
_typed(Frame, [], "spherical")
_typed(c_void_p, [], "session_create")
_typed(c_char_p, None, "version", "status_name", "verdict_text")
_typed(c_char_p, [c_void_p], "session_message", "session_offender")
_typed(c_void_p, [c_void_p], "text_data")
_typed(c_size_t, [c_void_p], "text_size", "mesh_node_count", "mesh_cell_count", "mesh_nodes_per_cell", "slopes_count")
_typed(c_double, [c_void_p], "march_time", "slopes_value")
_typed(c_double, [c_void_p, c_int64], "march_read")
_typed(None, [c_void_p, c_int64, c_double], "march_set")
_typed(c_int32, [c_void_p], "march_advance")
_typed(None, [c_void_p, POINTER(c_double), POINTER(c_double)], "model_advance")
_typed(None, [c_void_p], "model_reset")
for _options, _name in ((MarchOptions, "march"), (BracketOptions, "bracket"), (SizeOptions, "size"),
                        (CompactOptions, "compact"), (PictureOptions, "picture")):
    _typed(_options, [], _name + "_options_default")
if lib.tepor_abi_version() != 1:
    raise ImportError("libtepor has another ABI version than this module")

session = c_void_p(lib.tepor_session_create())


class Error(RuntimeError):
    """What the library refused: `status` is its short name, `offender` the name at fault."""

    def __init__(self, code):
        super().__init__(lib.tepor_session_message(session).decode())
        self.status = lib.tepor_status_name(code).decode()
        self.offender = lib.tepor_session_offender(session).decode()


def plain(argument):
    """Python arguments as ctypes ones: floats as doubles, texts encoded, handles by address."""
    if isinstance(argument, float):
        return c_double(argument)
    if isinstance(argument, str):
        return argument.encode()
    if isinstance(argument, Handle):
        return argument.handle
    return argument


def call(name, *arguments):
    code = getattr(lib, "tepor_" + name)(session, *[plain(a) for a in arguments])
    if code != 0:
        raise Error(code)


def number(name, *arguments):
    out = c_double()
    call(name, *arguments, ctypes.byref(out))
    return out.value


class Handle:
    """Owns what a create call made."""
    free = None

    def __init__(self, create, *arguments):
        self.handle = c_void_p()
        call(create, *arguments, ctypes.byref(self.handle))

    def __del__(self):
        if getattr(self, "handle", None) and lib:
            getattr(lib, self.free)(self.handle)


def array(numbers, kind=c_double):
    if hasattr(numbers, "ctypes"):  # a numpy array is passed as it lies
        if numbers.itemsize != ctypes.sizeof(kind) or not numbers.flags["C_CONTIGUOUS"]:
            raise TypeError("give a contiguous array of float64, or int32 for node numbers")
        return numbers.ctypes.data_as(POINTER(kind))
    return (kind * len(numbers))(*numbers)


def handles(things):
    return (c_void_p * max(1, len(things)))(*[t.handle for t in things])


def taken(made):
    """The bytes of a text, which is freed."""
    out = ctypes.string_at(lib.tepor_text_data(made), lib.tepor_text_size(made))
    lib.tepor_text_free(made)
    return out


def text(name, *arguments):
    made = c_void_p()
    call(name, *arguments, ctypes.byref(made))
    return taken(made)


def filled(name, handle, entries, *before):
    out = (c_double * entries)()
    call(name, handle, *before, out, c_size_t(entries))
    return out
