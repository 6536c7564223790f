"""Runs the sizing scripts and holds the numbers they print against closed forms and solves of another kind."""
import math
import re
import subprocess
import sys
from pathlib import Path

SCRIPTS = Path(__file__).resolve().parents[2] / "examples" / "scripts"
SIGMA = 5.670374419e-8  # W/(m2 K4), CODATA 2018
failures = 0


def run(name):
    out = subprocess.run([sys.executable, str(SCRIPTS / f"{name}.py")], capture_output=True, text=True, timeout=300)
    if out.returncode != 0:
        print(out.stdout, out.stderr)
        raise SystemExit(f"{name} ended with {out.returncode}")
    if "NOT BALANCED" in out.stdout or "balanced" not in out.stdout:
        raise SystemExit(f"{name} shows no closed balance:\n{out.stdout}")
    lines = (SCRIPTS / f"{name}.py").read_text().splitlines()
    expect(f"{name}: lines of the script", len(lines), 20, 20)
    return out.stdout


def number(text, words):
    return float(re.search(re.escape(words) + r"\s*(-?[0-9.]+)", text).group(1))


def expect(what, got, wanted, tolerance):
    global failures
    good = abs(got - wanted) <= tolerance
    failures += not good
    print(f"{'ok  ' if good else 'FAIL'} {what}: {got:.6g}, expected {wanted:.6g} +- {tolerance:.2g}")


def touch_temperature():  # conductivity integral of the table against the flux that leaves the casing
    text = run("touch_temperature")
    flux = 6.0 * 20.0 + 0.25 * SIGMA * (323.15 ** 4 - 303.15 ** 4)
    points = [(20, 0.038), (200, 0.062), (400, 0.105)]

    def k(t):
        for (a, ka), (b, kb) in zip(points, points[1:]):
            if t <= b:
                return ka + (kb - ka) * (t - a) / (b - a)

    cold, hot, n = 50.0 + flux * 0.001 / 200.0, 320.0 - flux * (1.0 / 40.0 + 0.004 / 45.0), 20000
    integral = sum(k(cold + (hot - cold) * (i + 0.5) / n) for i in range(n)) * (hot - cold) / n
    expect("touch temperature: thickness [mm]", number(text, "insulation thickness"), 1000.0 * integral / flux, 0.06)
    expect("touch temperature: loss", number(text, "loss"), flux, 0.06)


def busbar():  # copper is all but isothermal: Joule heat against what 0.14 m of perimeter loses at 90 degC
    text = run("busbar")
    loss = 0.14 * (7.0 * 55.0 + 0.4 * SIGMA * (363.15 ** 4 - 308.15 ** 4))
    resistance = 1.724e-8 * (1.0 + 0.00393 * 70.0) / 6e-4
    expect("busbar: current [A]", number(text, "current"), math.sqrt(loss / resistance), 2.0)
    expect("busbar: heat [W/m]", number(text, "heat"), loss, 0.1)


def fin_spacing():  # straight fin with convecting tip, Incropera & DeWitt table 3.4 case A (from memory)
    text = run("fin_spacing")
    best = 0.0
    for gap in [0.002 * i for i in range(1, 11)]:
        h = 8.0 * (1.0 - 2.718 ** (-(gap / 0.006) ** 1.5))
        m = math.sqrt(h * 2.0 / (200.0 * 0.002))
        s, c, tip = math.sinh(m * 0.04), math.cosh(m * 0.04), h / (m * 200.0)
        fin = math.sqrt(h * 2.0 * 200.0 * 0.002) * 55.0 * (s + tip * c) / (c + tip * s)
        best = max(best, int(0.2 / (gap + 0.002)) * (fin + h * gap * 55.0))
    expect("fin spacing: heat [W/m]", number(text, "mm:"), best, 0.06)


def lining_heat_up():  # finite volumes with implicit steps, conductivity of the step before
    text = run("lining_heat_up")
    cells = [("brick", 0.230 / 60)] * 60 + [("fibre", 0.060 / 24)] * 24 + [("casing", 0.003)] * 2
    heat = {"brick": 2100.0 * 960.0, "fibre": 200.0 * 1050.0, "casing": 7850.0 * 470.0}

    def k(name, t):
        if name == "brick":
            return 1.10 + (t - 20.0) * 0.15 / 580.0 if t < 600.0 else 1.25 + (t - 600.0) * 0.25 / 700.0
        return 0.16 if name == "fibre" else 48.0

    T, dt, time, shell = [25.0] * len(cells), 60.0, 0.0, 25.0
    while shell < 60.0:
        time += dt
        gas = 25.0 + (1100.0 - 25.0) * min((time - 0.5 * dt) / 14400.0, 1.0)
        r = [w / k(n, t) for (n, w), t in zip(cells, T)]
        g = [1.0 / (1.0 / 60.0 + 0.5 * r[0])] + [2.0 / (a + b) for a, b in zip(r, r[1:])]
        film = 8.0 + 0.85 * SIGMA * ((T[-1] + 273.15) ** 2 + 298.15 ** 2) * (T[-1] + 273.15 + 298.15)
        g.append(1.0 / (1.0 / film + 0.5 * r[-1]))
        up, right = [], []  # elimination of the tridiagonal system
        for i, (name, w) in enumerate(cells):
            c = w * heat[name] / dt
            b = c * T[i] + (g[0] * gas if i == 0 else 0.0) + (g[-1] * 25.0 if i == len(cells) - 1 else 0.0)
            d = c + g[i] + g[i + 1]
            if i > 0:
                d -= g[i] * up[-1]
                b += g[i] * right[-1]
            up.append(g[i + 1] / d)
            right.append(b / d)
        T[-1] = right[-1]
        for i in range(len(cells) - 2, -1, -1):
            T[i] = right[i] + up[i] * T[i + 1]
        shell = T[-1] + (25.0 - T[-1]) * 0.5 * r[-1] * g[-1]
    expect("lining heat-up: hours", number(text, "degC after"), time / 3600.0, 0.1)


def buried_cables():  # line sources and their images in a half space, three of 40 W/m
    text = run("buried_cables")
    s = number(text, "spacing")
    lone = math.log(2.0 * 0.8 / 0.035)
    others = 2.0 * math.log(math.hypot(s, 1.6) / s)
    inside = 40.0 / (8.0 * math.pi * 5.0)  # mean over the cable against its surface
    expect("buried cables: middle [degC]", number(text, "middle cable"), 15.0 + 40.0 / (2.0 * math.pi) * (lone + others) + inside, 0.5)


def platen_power():  # what leaves the faces, the metal being nearly isothermal; rated power from the law at the heaters' mean
    text = run("platen_power")
    given = 60.0 * 0.24 * 158.0 + 1.5 * 0.4 * 0.72 * (183.0 - 22.0)
    expect("platen power: given [W]", number(text, "given when hot"), given, 0.005 * given)
    hot = number(text, "hottest heater")
    expect("platen power: rated [W]", number(text, "rated power"), given * (1.0 + 0.0008 * (hot - 22.0)), 0.01 * given)


for check in (touch_temperature, busbar, fin_spacing, lining_heat_up, buried_cables, platen_power):
    check()
raise SystemExit(1 if failures else 0)
