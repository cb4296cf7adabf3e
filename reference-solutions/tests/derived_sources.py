"""Derives source terms with SymPy from the equations as the contract states them, and compares.

Reads cases as JSON from stdin; evaluates SymPy's expressions in extended precision, so that only the other side's rounding counts.
Prints the worst error of each case; leaves with status 1 if one is above 1e-13 of the largest value of its output.
"""

import json
import math
import sys

import numpy as np
import sympy as sp

X = sp.symbols("x y z", real=True)
T = sp.Symbol("t", real=True)
NAMES = {str(s): s for s in (*X, T)}


def read(text):
    functions = {
        "heaviside": lambda a: sp.Heaviside(a, sp.Rational(1, 2)),
        "abs": sp.Abs,
        "log": sp.log,
        "if": lambda c, a, b: sp.Piecewise((a, c), (b, True)),
    }
    text = text.replace("^", "**").replace("if(", "If(")
    functions["If"] = functions.pop("if")
    return sp.sympify(text, locals={**NAMES, **functions}, rational=True)


def grad(f, d):
    return [sp.diff(f, x) for x in X[:d]]


def div(v, d):
    return sum(sp.diff(c, x) for c, x in zip(v, X[:d]))


def dot(a, b):
    return sum(p * q for p, q in zip(a, b))


def scalar(d, p, s):
    u = s["u"]
    a, nu = p.get("velocity", [0] * d), p.get("diffusivity", [0])[0]
    return [sp.diff(u, T) + dot(a, grad(u, d)) - div([nu * g for g in grad(u, d)], d)]


def dispersion(d, p, s):
    return [sp.diff(s["u"], T) + p["dispersion"][0] * sp.diff(s["u"], X[0], 3)]


def burgers(d, p, s):
    u = s["u"]
    return [sp.diff(u, T) + div([u**2 / 2] * d, d) - p["viscosity"][0] * div(grad(u, d), d)]


def poisson(d, p, s):
    return [-div([p["conductivity"][0] * g for g in grad(s["u"], d)], d)]


def acoustics(d, p, s):
    rho, c, mean = p["density"][0], p["sound_speed"][0], p["velocity"]
    v = [s[n] for n in "uvw"[:d]]
    material = lambda f: sp.diff(f, T) + dot(mean, grad(f, d))
    return [material(s["p"]) + rho * c**2 * div(v, d)] + [material(a) + g / rho for a, g in zip(v, grad(s["p"], d))]


def shallow_water(d, p, s):
    g, bed, h = p["gravity"][0], p["bed"][0], s["depth"]
    q = [s.get("discharge_" + n, h * s.get("velocity_" + n, 0)) for n in "xy"[:d]]
    out = [sp.diff(h, T) + div(q, d)]
    for i in range(d):
        flux = [q[i] * q[j] / h + (g * h**2 / 2 if i == j else 0) for j in range(d)]
        out.append(sp.diff(q[i], T) + div(flux, d) + g * h * sp.diff(bed, X[i]))
    return out


def gas(d, p, s, viscous):
    gamma = p["gamma"][0]
    rho = s["density"]
    if "pressure" in s:
        v = [s["velocity_" + n] for n in "xyz"[:d]]
        pressure = s["pressure"]
        energy = pressure / (gamma - 1) + rho * dot(v, v) / 2
    else:
        v = [s["momentum_" + n] / rho for n in "xyz"[:d]]
        energy = s["energy"]
        pressure = (gamma - 1) * (energy - rho * dot(v, v) / 2)
    stress, heat = [[0] * d for _ in range(d)], [0] * d
    if viscous:
        mu, r = p["viscosity"][0], p["gas_constant"][0]
        k = mu * gamma * r / ((gamma - 1) * p["prandtl"][0])
        stress = [
            [
                mu * (sp.diff(v[i], X[j]) + sp.diff(v[j], X[i]) - (sp.Rational(2, 3) * div(v, d) if i == j else 0))
                for j in range(d)
            ]
            for i in range(d)
        ]
        heat = [-k * g for g in grad(pressure / (rho * r), d)]
    out = [sp.diff(rho, T) + div([rho * a for a in v], d)]
    for i in range(d):
        flux = [rho * v[i] * v[j] + (pressure if i == j else 0) - stress[i][j] for j in range(d)]
        out.append(sp.diff(rho * v[i], T) + div(flux, d))
    flux = [(energy + pressure) * v[j] - dot(stress[j], v) + heat[j] for j in range(d)]
    return out + [sp.diff(energy, T) + div(flux, d)]


def incompressible(d, p, s):
    v = [s[n] for n in "uvw"[:d]]
    momentum = [
        sp.diff(a, T) + dot(v, grad(a, d)) + sp.diff(s["p"], X[i]) - p["viscosity"][0] * div(grad(a, d), d)
        for i, a in enumerate(v)
    ]
    return momentum + [div(v, d)]


def korteweg(d, p, s):
    u = s["u"]
    return [sp.diff(u, T) + p["a"][0] * u * sp.diff(u, X[0]) + sp.diff(u, X[0], 3)]


def predator(d, p, s):
    u, v, k = s["u"], s["v"], p["k"][0]
    return [
        sp.diff(u, T) - sp.diff((1 + u**2) * sp.diff(u, X[0]), X[0]) - u * (1 - v),
        sp.diff(v, T) - k * (sp.diff(v, X[0], 2) + sp.diff(v, X[1], 2)) + v * (1 - u) + sp.diff(u * v, X[1]),
    ]


EQUATIONS = {
    "advection": scalar,
    "diffusion": scalar,
    "advection_diffusion": scalar,
    "dispersion": dispersion,
    "burgers": burgers,
    "poisson": poisson,
    "acoustics": acoustics,
    "shallow_water": shallow_water,
    "euler": lambda d, p, s: gas(d, p, s, False),
    "navier_stokes": lambda d, p, s: gas(d, p, s, True),
    "incompressible": incompressible,
    "my_korteweg": korteweg,
    "my_system": predator,
}


# NumPy has no error function; the one of the C library is in double precision.
ERROR_FUNCTION = {"erf": np.vectorize(math.erf, otypes=[np.longdouble])}


def main():
    bad = False
    for case in json.load(sys.stdin):
        parameters = {name: [read(text) for text in texts] for name, texts in case["parameters"].items()}
        solution = {name: read(text) for name, text in case["solution"].items()}
        d = case["dimensions"]
        sources = EQUATIONS[case["equation"]](d, parameters, solution)
        assert len(sources) == len(case["values"]), case["equation"]
        points = [np.array(column, dtype=np.longdouble) for column in zip(*case["points"])]
        f = sp.lambdify((*X, T), [sp.sympify(s) for s in sources], modules=[ERROR_FUNCTION, "numpy"], cse=True)
        with np.errstate(all="raise", under="ignore"):
            expected = [np.broadcast_to(e, points[0].shape) for e in f(*points)]
        worst = 0.0
        for field, (e, found) in enumerate(zip(expected, case["values"])):
            scale = np.max(np.abs(e))
            error = float(np.max(np.abs(e - np.array(found, dtype=np.longdouble))) / (scale if scale else 1))
            if not error <= 1e-13:
                bad = True
                print(f"ABOVE 1e-13: output {field}")
            worst = max(worst, error)
        print(f"{case['equation']} {d}-D: {worst:.1e} of the largest value")
    sys.exit(1 if bad else 0)


main()
