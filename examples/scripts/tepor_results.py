"""What comes back from a body, for tepor.py: fields, slopes, fits, small models, marches."""
from ctypes import byref, c_double, c_int64, c_size_t

import tepor_ctypes as c
from tepor_ctypes import Handle, call, filled, lib, number, text


def _balance_text(self):
    verdict = "balanced" if self.balanced else "NOT BALANCED"
    return (f"heat in {self.into:.6g} W, out {self.out:.6g} W, generated {self.generated:.6g} W, stored {self.stored:.6g} W; "
            f"left over {self.left_over:.1e} W (rounding {self.floor:.1e} W): {verdict}")


c.Balance.__str__ = _balance_text


class Field(Handle):
    free = "tepor_field_free"

    def __getitem__(self, quantity):
        return number("field_value", self, quantity)

    def balance(self):
        out = c.Balance()
        call("field_balance", self, byref(out))
        return out

    def gradient(self, quantity):
        """Derivatives of a quantity by every parameter: one extra solve for all."""
        return Slopes("gradient", self, quantity)

    def temperatures(self, mesh):
        return filled("field_temperatures", self, mesh.node_count())

    def text(self):
        return text("field_text", self).decode()

    def svg(self, picture="map", title=None, width=720.0):
        """A picture: "map" of a 2D body, "profile" of a 1D one."""
        options = lib.tepor_picture_options_default()
        options.width, options.title = width, title.encode() if title else None
        return text(picture + "_svg", self, byref(options))

    def vtu(self):
        return text("field_vtu", self)


class Slopes(Handle):
    free = "tepor_slopes_free"

    def __getitem__(self, parameter):
        return number("slopes_by", self, parameter)

    def ranked(self):
        """(name, value, derivative, per cent per per cent) of every parameter, the largest relative one first."""
        for rank in range(lib.tepor_slopes_count(self.handle)):
            one = c.Slope()
            call("slopes_ranked", self, c_size_t(rank), byref(one))
            yield one.parameter.decode(), one.value, one.derivative, one.relative


class Fitted(Handle):
    free = "tepor_fitted_free"

    def __getitem__(self, parameter):
        out = c.Estimated()
        call("fitted_value", self, parameter, byref(out))
        return out

    def predict(self, quantity):
        out = c.Estimated()
        call("fitted_predict", self, quantity, None, c_size_t(0), byref(out))
        return out

    def agreement(self):
        out = c.Agreement()
        call("fitted_agreement", self, byref(out))
        return out


class Model(Handle):
    """x := A x + B (u - u0), y = y0 + C x + D (u - u0)."""
    free = "tepor_model_free"

    def facts(self):
        out = c.ModelFacts()
        call("model_facts_of", self, byref(out))
        return out

    def steady_gain(self, output=0, into=0):
        return number("model_steady_gain", self, c_int64(output), c_int64(into))

    def advance(self, *inputs):
        """One step with the inputs held; the outputs at its end."""
        if not hasattr(self, "_y"):
            self._y = (c_double * self.facts().outputs)()
        lib.tepor_model_advance(self.handle, (c_double * len(inputs))(*inputs), self._y)
        return list(self._y)

    def c_source(self, name):
        return text("model_c_source", self, name).decode()


class March(Handle):
    free = "tepor_march_free"

    def __init__(self, body, initial, step, theta, tolerance):
        options = lib.tepor_march_options_default()
        options.step, options.theta, options.tolerance = step, theta, tolerance
        if isinstance(initial, Field):
            super().__init__("march_create_from", body, initial, byref(options))
        else:
            super().__init__("march_create", body, float(initial), byref(options))

    def watch(self, quantity):
        out = c_int64()
        call("march_watch", self, quantity, byref(out))
        return out.value

    def drive(self, parameter):
        out = c_int64()
        call("march_drive", self, parameter, byref(out))
        return out.value

    def set(self, handle, value):
        lib.tepor_march_set(self.handle, handle, value)

    def read(self, probe):
        return lib.tepor_march_read(self.handle, probe)

    def advance(self):
        verdict = lib.tepor_march_advance(self.handle)
        if verdict > 1:
            raise RuntimeError(lib.tepor_verdict_text(verdict).decode())

    def advance_to(self, time):
        call("march_advance_to", self, float(time))

    def time_to_reach(self, quantity, value, latest=0.0):
        return number("march_time_to_reach", self, quantity, float(value), float(latest))

    @property
    def time(self):
        return lib.tepor_march_time(self.handle)

    def __getitem__(self, quantity):
        return number("march_value", self, quantity)

    def balance(self):
        out = c.Balance()
        call("march_balance", self, byref(out))
        return out
