"""Marching against a general-purpose integrator of stiff equations (SciPy's, in numpy arrays): the body's equations in space are
written out here once more, cell by cell, and handed over as dT/dt = f(t, T). What differs is how time is gone through.
"""
import sys
from pathlib import Path

import numpy as np
from scipy.integrate import solve_ivp

sys.path.insert(0, str(Path(__file__).resolve().parents[2] / "examples" / "scripts"))
import tepor  # noqa: E402

SIGMA, ZERO = 5.670374419e-8, 273.15  # W/(m2 K4), CODATA 2018; 0 degC in K
failures = 0


def expect(what, good, text):
    global failures
    failures += not good
    print(f"{'ok  ' if good else 'FAIL'} {what}: {text}")


def integrate(rate, start, stops):
    """Temperatures at the stops; data may jump or bend there, so the integrator begins anew at each."""
    T, before, out = start, 0.0, []
    for stop in stops:
        T = solve_ivp(rate, (before, stop), T, method="Radau", rtol=1e-10, atol=1e-8).y[:, -1]
        before = stop
        out.append(T)
    return out


def hot_wall():
    """k and c of temperature, a source of temperature, a ramp, radiation and a film law: nothing here has a closed form."""
    n, length, rho, last = 10, 0.05, 2000.0, 1800.0
    h = length / n
    body = tepor.Body(tepor.layers([("wall", length, n)], element="segment 1"))
    body.material("wall", tepor.table([(0, 1.0), (1000, 3.0)]), rho, tepor.table([(0, 800.0), (1000, 1300.0)]))
    body.generation("wall", per_volume=tepor.law(lambda s: 2e5 * (1.0 + 0.001 * (s.temperature - 20.0))))
    body.film("inner", 100.0, tepor.schedule([(0, 20.0), (600, 800.0)], ramps=True))
    body.film("outer", tepor.law(lambda s: 2.0 * (abs(s.temperature - s.fluid) + 1e-3) ** 0.25), 25.0)
    body.radiation("outer", 0.8, 25.0)

    volume = np.full(n + 1, h)
    volume[[0, -1]] = 0.5 * h

    def rate(t, T):  # order 1: k(T) is linear in T, so its mean over a cell is that of the middle; the source likewise
        flow = (1.0 + 0.001 * (T[:-1] + T[1:])) * (T[:-1] - T[1:]) / h
        f = 2e5 * (1.0 + 0.001 * (T - 20.0))
        heat = np.zeros(n + 1)
        heat[:-1] += -flow + h / 6.0 * (2.0 * f[:-1] + f[1:])
        heat[1:] += flow + h / 6.0 * (f[:-1] + 2.0 * f[1:])
        heat[0] += 100.0 * (20.0 + 780.0 * min(t / 600.0, 1.0) - T[0])
        d = T[-1] - 25.0
        heat[-1] -= 2.0 * (abs(d) + 1e-3) ** 0.25 * d + 0.8 * SIGMA * ((T[-1] + ZERO) ** 4 - (25.0 + ZERO) ** 4)
        return heat / (rho * (800.0 + 0.5 * T) * volume)

    exact = integrate(rate, np.full(n + 1, 20.0), [600.0, last])[-1]
    places = [tepor.at(i * h) for i in range(n + 1)]

    def worst(**options):
        march = body.march(20.0, **options)
        march.advance_to(last)
        return max(abs(march[p] - T) for p, T in zip(places, exact)), march

    coarse, fine = worst(step=20.0)[0], worst(step=10.0)[0]
    expect("hot wall, theta 1/2", 3.4 <= coarse / fine <= 4.6 and fine < 2e-3,
           f"{coarse:.2e} and {fine:.2e} K at 20 and 10 s, a ratio of {coarse / fine:.2f} (order 2: 4)")
    coarse, fine = worst(step=20.0, theta=1.0)[0], worst(step=10.0, theta=1.0)[0]
    expect("hot wall, theta 1", 1.8 <= coarse / fine <= 2.2, f"{coarse:.2e} and {fine:.2e} K at 20 and 10 s (order 1: 2)")
    error, march = worst(tolerance=1e-4)
    expect("hot wall, adaptive", error < 2e-2, f"{error:.2e} K at a tolerance of 1e-4 K")
    balance = march.balance()
    expect("hot wall, balance of the last step", balance.balanced == 1, f"{balance}")


def block():
    """Two materials with a contact between them and a pulse of heat, on squares."""
    h, depth = 0.005, 1.0
    tiles = tepor.Tiles()
    tiles.add("core", (0.0, 0.0), (0.03, 0.04))
    tiles.add("shell", (0.03, 0.0), (0.05, 0.04))
    body = tepor.Body(tiles.mesh(1.001 * h, tepor.planar(depth), element="quadrilateral 1"))
    body.material("core", 45.0, 7850.0, 470.0)
    body.material("shell", 2.0, 2500.0, 900.0)
    body.contact("core", "shell", 500.0)
    body.film("right", 40.0, 15.0)
    body.flux_into("left", tepor.schedule([(0, 0.0), (30, 20000.0), (50, 0.0)]))

    ny = 9
    at, count = {}, 0  # (region, i, j) -> unknown; the interface i = 6 has two
    for region, first, last in (("core", 0, 6), ("shell", 6, 10)):
        for i in range(first, last + 1):
            for j in range(ny):
                at[region, i, j] = count
                count += 1
    K, mass = np.zeros((count, count)), np.zeros(count)
    pulse, film = np.zeros(count), np.zeros(count)
    square = np.array([[4, -1, -2, -1], [-1, 4, -1, -2], [-2, -1, 4, -1], [-1, -2, -1, 4]]) / 6.0
    edge = h * depth * np.array([[2, 1], [1, 2]]) / 6.0
    for region, first, last, k, heat in (("core", 0, 6, 45.0, 7850.0 * 470.0), ("shell", 6, 10, 2.0, 2500.0 * 900.0)):
        for i in range(first, last):
            for j in range(ny - 1):
                ids = [at[(region,) + c] for c in ((i, j), (i + 1, j), (i + 1, j + 1), (i, j + 1))]
                K[np.ix_(ids, ids)] += k * depth * square
                mass[ids] += heat * h * h * depth / 4.0
    for j in range(ny - 1):
        a, b = [[at[r, 6, j], at[r, 6, j + 1]] for r in ("core", "shell")]
        K[np.ix_(a + b, a + b)] += 500.0 * np.block([[edge, -edge], [-edge, edge]])
        right = [at["shell", 10, j], at["shell", 10, j + 1]]
        K[np.ix_(right, right)] += 40.0 * edge
        film[right] += 40.0 * 15.0 * h * depth / 2.0
        pulse[[at["core", 0, j], at["core", 0, j + 1]]] += h * depth / 2.0

    def rate(flux):
        return lambda t, T: (film + flux * pulse - K @ T) / mass

    T, before = np.full(count, 20.0), 0.0
    for stop, flux in ((30.0, 0.0), (50.0, 20000.0), (400.0, 0.0)):
        T = solve_ivp(rate(flux), (before, stop), T, method="Radau", rtol=1e-10, atol=1e-9, jac=-K / mass[:, None]).y[:, -1]
        before = stop
    for what, options, limit in (("theta 1/2 of 8 s", {"step": 8.0}, 5e-3), ("adaptive", {"tolerance": 1e-5}, 2e-3)):
        march = body.march(20.0, **options)
        march.advance_to(400.0)
        error = max(abs(march[tepor.at(h * i, h * j, region)] - T[u]) for (region, i, j), u in at.items())
        expect(f"block, {what}", error < limit, f"{error:.2e} K, at most {limit:g}")


hot_wall()
block()
raise SystemExit(1 if failures else 0)
