"""Checks the catalogue with SymPy and mpmath, apart from the program.

Standard input: one JSON object a line, written by catalogue.rs, with the program's own values of a problem at random points.
Argument: the folder of the catalogue. Each line of output is a fault; the last line counts what was compared.

For each problem: the residual of the solution, at 50 digits, equals its source (or vanishes) to 1e-12 of its largest term; the
program's values, slopes and sources equal those computed here.
"""

import json
import sys
import tomllib
from pathlib import Path

import sympy as sp
from mpmath import mp, mpf

import equations
import formulas
import solvers

mp.dps = 50
# Of the largest value: an angle of some tens of radians costs an f64 a few digits of its sine.
VALUES, SOURCES, RESIDUALS = mpf("1e-13"), mpf("1e-12"), mpf("1e-12")


class Checker:
    def __init__(self):
        self.faults, self.comparisons = 0, 0

    def compare(self, what, found, expected, scale, tolerance):
        self.comparisons += 1
        if not abs(mpf(found) - expected) <= tolerance * scale:
            self.faults += 1
            print(f"{what}: the program has {found}, here it is {mp.nstr(expected, 20)} (scale {mp.nstr(scale, 5)})")

    def vanishes(self, what, value, scale):
        self.comparisons += 1
        if not abs(value) <= RESIDUALS * scale:
            self.faults += 1
            print(f"{what}: the residual misses the source by {mp.nstr(value, 5)} at a scale of {mp.nstr(scale, 5)}")


def largest(rows, index):
    return max(abs(row[index]) for row in rows) or mpf(1)


def check_formulas(checker, name, problem, points):
    d = problem["dimensions"]
    coordinates = list("xyz"[:d])
    names = formulas.names_of(problem, coordinates)
    solution = {key: formulas.read(text, names) for key, text in problem["solution"].items()}
    fields = equations.conserved(problem["equation"], d, solution, names)
    terms = equations.residual_terms(problem["equation"], d, fields, parameter_of(problem, names, d))
    slopes = [sp.diff(field, axis) for field in fields for axis in equations.AXES[:d]]
    arguments = equations.AXES[:d] + [equations.t]
    flat = [term for group in terms for term in group]
    function = sp.lambdify(arguments, fields + slopes + flat, "mpmath", cse=True)
    evaluated = [[mpf(v) for v in function(*[mpf(c) for c in point["at"]], mpf(point["time"]))] for point in points]
    count = len(fields)
    for index in range(count * (1 + d)):
        key, kind = ("values", index) if index < count else ("slopes", index - count)
        scale = largest(evaluated, index)
        for point, row in zip(points, evaluated):
            checker.compare(f"{name}: {key}[{kind}] at {point['at']}", point[key][kind], row[index], scale, VALUES)
    offset = count * (1 + d)
    for field, group in enumerate(terms):
        rows = [row[offset : offset + len(group)] for row in evaluated]
        offset += len(group)
        scale = max(abs(term) for row in rows for term in row) or mpf(1)
        for point, row in zip(points, rows):
            what = f"{name}: source {field} at {point['at']}"
            if problem.get("source", "none") == "derived":
                checker.compare(what, point["sources"][field], sum(row), scale, SOURCES)
            else:
                checker.vanishes(what, sum(row), scale)


def parameter_of(problem, names, d):
    def parameter(name):
        given = problem.get("coefficients", {}).get(name)
        if given is not None:
            return [formulas.read(text, names) for text in (given if isinstance(given, list) else [given])]
        given = problem.get("parameters", {}).get(name, equations.DEFAULTS.get((problem["equation"], name)))
        values = given if isinstance(given, list) else [given] * (d if name == "velocity" else 1)
        return [formulas.number(one) for one in values]

    return parameter


def check_solver(checker, name, problem, points):
    """Values and slopes from an independent solver; residuals with its derivatives, taken numerically at 50 digits."""
    d, equation = problem["dimensions"], problem["equation"]
    names = formulas.names_of(problem, list("xyz"[:d]))
    exact = solvers.solver(problem, names)
    fields = equations.fields(equation, d)
    given = problem.get("solution", {})
    solved = [field for field in fields if field not in given]
    swirl = problem["exact"]["solver"] == "swirl"
    points = points[:2] if swirl else points  # each path takes a while
    where = [([mpf(c) for c in point["at"]], mpf(point["time"])) for point in points]
    expected = [exact(time, *(at + [mpf(0)] * (2 - len(at)))) for at, time in where]
    for index, field in enumerate(solved):
        scale = largest(expected, index)
        for point, row in zip(points, expected):
            found = point["values"][fields.index(field)]
            checker.compare(f"{name}: {field} at {point['at']}, {point['time']}", found, row[index], scale, VALUES)
    for point, (at, time) in zip(points, where):
        if swirl:
            check_carried(checker, name, problem, names, exact, point)
        else:
            place = at + [mpf(0)] * (2 - len(at))
            check_solver_residual(checker, name, problem, names, exact, solved, (at, time, place), point)


def check_carried(checker, name, problem, names, exact, point):
    """u_t + a . grad u = 0 for the swirl, with derivatives taken numerically, and its slopes."""
    with mp.workdps(30):
        place = [mpf(point["time"])] + [mpf(c) for c in point["at"]]
        along = lambda k: mp.diff(lambda s: exact(*[s if i == k else c for i, c in enumerate(place)])[0], place[k])
        rate, slopes = along(0), [along(1), along(2)]
        numbers = dict(zip([equations.t, equations.x, equations.y], [sp.Float(c, 30) for c in place]))
        velocity = [mpf(sp.N(v.subs(numbers), 30)) for v in parameter_of(problem, names, 2)("velocity")]
        terms = [rate] + [component * slope for component, slope in zip(velocity, slopes)]
        checker.vanishes(f"{name} at {point['at']}", sum(terms), max(abs(term) for term in terms))
        scale = max(abs(slope) for slope in slopes)
        for axis, slope in enumerate(slopes):
            checker.compare(f"{name}: slope at {point['at']}", point["slopes"][axis], slope, scale, 10 * VALUES)


def check_solver_residual(checker, name, problem, names, exact, solved, where, point):
    """Puts the derivatives of the solver's solution into the equation: each field becomes its Taylor polynomial at the point."""
    at, time, place = where
    d, equation = problem["dimensions"], problem["equation"]
    fields = equations.fields(equation, d)
    given = {key: formulas.read(text, names) for key, text in problem.get("solution", {}).items()}
    axis = "xyz".index(problem["exact"].get("axis", "x"))
    symbol = equations.AXES[axis]
    moved = lambda s: [s if index == axis else c for index, c in enumerate(place)]
    values, slopes = exact(time, *place), []
    for index, field in enumerate(solved):
        along = lambda s: exact(time, *moved(s))[index]
        first, second = mp.diff(along, place[axis], 1), mp.diff(along, place[axis], 2)
        rate = mp.diff(lambda s: exact(s, *place)[index], time, 1)
        slopes.append(first)
        exactly = lambda v: sp.Float(v, 50)
        offset, later = symbol - exactly(place[axis]), equations.t - exactly(time)
        given[field] = exactly(values[index]) + exactly(first) * offset + exactly(second) * offset**2 / 2 + exactly(rate) * later
    slope_scale = max(max(abs(s) for s in slopes), mpf("1e-3"))
    for index, field in enumerate(solved):
        found = point["slopes"][fields.index(field) * d + axis]
        checker.compare(f"{name}: slope of {field} at {point['at']}", found, slopes[index], slope_scale, 10 * VALUES)
    terms = equations.residual_terms(equation, d, [given[f] for f in fields], parameter_of(problem, names, d))
    numbers = dict(zip(equations.AXES[:d] + [equations.t], [sp.Float(c, 50) for c in at + [time]]))
    for field, group in enumerate(terms):
        row = [mpf(sp.N(sp.sympify(term).subs(numbers), 45)) for term in group]
        # Where the depth is zero the equation of the discharge has no meaning.
        if all(mp.isfinite(term) for term in row):
            scale = max(max(abs(term) for term in row), slope_scale * mpf("1e-3"))
            checker.vanishes(f"{name}: equation {field} at {point['at']}", sum(row), scale)


def main():
    folder, checker = Path(sys.argv[1]), Checker()
    for line in sys.stdin:
        entry = json.loads(line)
        problem = tomllib.loads((folder / f"{entry['name']}.toml").read_text(encoding="utf-8"))
        check = check_solver if "exact" in problem else check_formulas
        check(checker, entry["name"], problem, entry["points"])
    print(f"{checker.comparisons} comparisons, {checker.faults} faults")
    sys.exit(1 if checker.faults else 0)


main()
