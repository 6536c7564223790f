"""Runs the sizing scripts and holds the numbers they print against closed forms and solves of another kind."""
import math
import os
import re
import shutil
import subprocess
import sys
from pathlib import Path

SCRIPTS = Path(__file__).resolve().parents[2] / "examples" / "scripts"
SIGMA = 5.670374419e-8  # W/(m2 K4), CODATA 2018
failures = 0
told = set()  # languages that were heard


def others(name):
    """The same question asked from C, built into the folder TEPOR_C_EXAMPLES, and from Perl where it can call C."""
    program = Path(os.environ.get("TEPOR_C_EXAMPLES", "")) / f"example-c-{name}"
    if name in ("touch_temperature", "lining_heat_up") and program.is_file():
        yield "C", [str(program)]
    perl = shutil.which("perl")
    if (SCRIPTS / f"{name}.pl").is_file():
        if perl and subprocess.run([perl, "-MFFI::Platypus=2.00", "-e", "1"], capture_output=True).returncode == 0:
            yield "Perl", [perl, str(SCRIPTS / f"{name}.pl")]
        else:
            print(f"skipped: {name}.pl, Perl has no FFI::Platypus (Debian: libffi-platypus-perl)")


def run(name):
    out = subprocess.run([sys.executable, str(SCRIPTS / f"{name}.py")], capture_output=True, text=True, timeout=300)
    if out.returncode != 0:
        print(out.stdout, out.stderr)
        raise SystemExit(f"{name} ended with {out.returncode}")
    if "NOT BALANCED" in out.stdout or "balanced" not in out.stdout:
        raise SystemExit(f"{name} shows no closed balance:\n{out.stdout}")
    lines = (SCRIPTS / f"{name}.py").read_text().splitlines()
    expect(f"{name}: lines of the script", len(lines), 20, 19)
    if name != "fin_spacing" and "Caution" not in out.stdout:
        raise SystemExit(f"{name} shows no caution:\n{out.stdout}")
    numbers = [line for line in out.stdout.splitlines() if re.match(r"[a-z].*\d", line) and "balanced" not in line]
    for language, command in others(name):
        other = subprocess.run(command, capture_output=True, text=True, timeout=300)
        same = [line for line in numbers if line in other.stdout.splitlines()]
        expect(f"{name} in {language}: lines as in Python", len(same), max(2, len(numbers) - (name == "lining_heat_up")), 0)
        expect(f"{name} in {language}: balanced", "balanced" in other.stdout and "NOT" not in other.stdout, True, 0)
        told.add(language)
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


def furnace_sensitivities():  # resistances in series: d ln q / d ln r = - r / R, temperatures by their share of the difference
    text = run("furnace_sensitivities")
    r = {"film inside": 1 / 80.0, "brick": 0.230 / 1.30, "contact": 1 / 500.0, "backing": 0.110 / 0.25, "film outside": 1 / 9.0}
    total = sum(r.values())
    loss = 1125.0 / total
    expect("furnace: loss [W/m2]", number(text, "loss"), loss, 0.006)
    expect("furnace: casing", number(text, "casing"), 25.0 + loss / 9.0, 0.006)
    wanted = {"gas temperature": 1150.0 / 1125.0, "hall temperature": -25.0 / 1125.0, "film inside": r["film inside"] / total,
              "film outside": r["film outside"] / total, "contact": r["contact"] / total,
              "brick conductivity": r["brick"] / total, "brick thickness": -r["brick"] / total,
              "backing conductivity": r["backing"] / total, "backing thickness": -r["backing"] / total}
    ranks = []
    for name, relative in wanted.items():
        row = re.search(re.escape(name) + r"\s+\S+\s+\S+\s+(-?[0-9.]+)", text)
        expect(f"furnace: % per % of {name}", float(row.group(1)), relative, 5.1e-5)
        ranks.append((row.start(), abs(relative)))
    order = [relative for _, relative in sorted(ranks)]
    expect("furnace: ranked by size", order == sorted(order, reverse=True), True, 0)


def film_from_thermocouples():  # the plate's closed form T = 21 + q (1/h + (L - x)/k), linear in 1/h; search over k, then normal equations
    text = run("film_from_thermocouples")
    rows = [(5000.0, x, T) for x, T in zip((0.002, 0.010, 0.018), (71.6, 68.7, 66.4))]
    rows += [(12000.0, x, T) for x, T in zip((0.002, 0.010, 0.018), (142.0, 135.7, 129.9))]
    h, k = 100.0, 15.0
    for _ in range(50):  # Gauss-Newton by hand, the certificate as a seventh reading
        a = b = d = u = v = 0.0
        for q, x, T in rows:
            e = (T - 21.0 - q * (1 / h + (0.020 - x) / k)) / 0.2
            jh, jk = -q / h ** 2 / 0.2, -q * (0.020 - x) / k ** 2 / 0.2
            a, b, d, u, v = a + jh * jh, b + jh * jk, d + jk * jk, u + jh * e, v + jk * e
        d, v = d + 1.0, v + (15.0 - k)
        det = a * d - b * b
        h, k = h + (d * u - b * v) / det, k + (a * v - b * u) / det
    sigma_h, sigma_k = math.sqrt(d / det), math.sqrt(a / det)
    for name, value, sigma in (("film coefficient", h, sigma_h), ("conductivity", k, sigma_k)):
        got = re.search(name + r"\s+([0-9.]+)\s+([0-9.]+)\s+([0-9.]+)", text)
        expect(f"thermocouples: {name}", float(got.group(1)), value, 0.0011)
        expect(f"thermocouples: {name}, lower end", float(got.group(2)), value - 1.96 * sigma, 0.0011)
        expect(f"thermocouples: {name}, upper end", float(got.group(3)), value + 1.96 * sigma, 0.0011)
    chi = sum(((T - 21.0 - q * (1 / h + (0.020 - x) / k)) / 0.2) ** 2 for q, x, T in rows) + (15.0 - k) ** 2
    expect("thermocouples: chi-square", number(text, "chi-square"), chi, 0.0011)
    expect("thermocouples: surface", number(text, "surface at 5000 W/m2"), 21.0 + 5000.0 / h, 0.006)


def platen_controller():  # the platen as one lump under the same PI law, by small steps
    text = run("platen_controller")
    steel = (0.30 * 0.05 - 3 * math.pi * 0.008 ** 2) * 0.4 * 7850.0 * 470.0 + 3 * math.pi * 0.008 ** 2 * 0.4 * 7900.0 * 500.0
    loss, goal = 20.0 * 0.70 * 0.4, 120.0  # W/K
    T = 22.0 + 600.0 / loss
    expect("controller: sensor at 600 W", number(text, "sensor at 600 W"), T, 0.01 * T)
    total, gain = 0.0, 1.0 / loss
    for i in range(1440):
        total += (goal - T) * 5.0 / 900.0
        power = 600.0 + 8.0 / gain * (goal - T + total)
        for _ in range(50):
            T += 0.1 / steel * (power - loss * (T - 22.0))
        if i == 119:
            expect("controller: after ten minutes", number(text, "after ten minutes"), T, 0.5)
    expect("controller: after two hours", number(text, "after two hours"), goal, 0.02)
    held = number(text.split("power")[1], "")
    expect("controller: power [W]", held, loss * 98.0, 0.01 * held)
    off = number(text, "model off by")
    expect("controller: compact model against the body [K]", off, 0.0, 0.02)


checks = (touch_temperature, busbar, fin_spacing, lining_heat_up, buried_cables, platen_power, furnace_sensitivities,
          film_from_thermocouples, platen_controller)
scripts = {path.stem for path in SCRIPTS.glob("*.py") if not path.stem.startswith("tepor")}
expect("scripts without a check", len(scripts ^ {check.__name__ for check in checks}), 0, 0)
for check in checks:
    check()
if os.environ.get("TEPOR_C_EXAMPLES"):
    expect("C was asked too", "C" in told, True, 0)
raise SystemExit(1 if failures else 0)
