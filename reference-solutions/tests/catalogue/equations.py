"""The equations of the contract, written once more with SymPy."""

import sympy as sp

x, y, z, t = (sp.Symbol(name, real=True) for name in "xyzt")
AXES = [x, y, z]
FIELDS = {
    "acoustics": lambda d: ["p", "u", "v", "w"][: d + 1],
    "shallow_water": lambda d: ["depth", "discharge_x", "discharge_y"][: d + 1],
    "euler": lambda d: ["density"] + ["momentum_x", "momentum_y", "momentum_z"][:d] + ["energy"],
    "incompressible": lambda d: ["u", "v", "w"][:d] + ["p"],
}
FIELDS["navier_stokes"] = FIELDS["euler"]


def fields(equation, d):
    return FIELDS.get(equation, lambda d: ["u"])(d)


def conserved(equation, d, solution, names):
    """The fields in order, from fields or from primitive quantities."""
    velocity = [solution.get(f"velocity_{axis}") for axis in "xyz"[:d]]
    if None in velocity:
        return [solution[name] for name in fields(equation, d)]
    if equation == "shallow_water":
        return [solution["depth"]] + [solution["depth"] * component for component in velocity]
    density, pressure = solution["density"], solution["pressure"]
    energy = pressure / (names["gamma"] - 1) + density * sum(component**2 for component in velocity) / 2
    return [density] + [density * component for component in velocity] + [energy]


def residual_terms(equation, d, u, parameter):
    """For each field the list of terms whose sum is the source. `parameter(name)` gives a list of components."""
    grad = lambda f: [sp.diff(f, axis) for axis in AXES[:d]]
    div = lambda v: [sp.diff(component, axis) for component, axis in zip(v, AXES)]
    rate = lambda f: sp.diff(f, t)
    carried = lambda v, f: [component * slope for component, slope in zip(v, grad(f))]
    spread = lambda k, f: [-term for term in div([k * slope for slope in grad(f)])]
    if equation == "advection":
        return [[rate(u[0])] + carried(parameter("velocity"), u[0])]
    if equation == "diffusion":
        return [[rate(u[0])] + spread(parameter("diffusivity")[0], u[0])]
    if equation == "advection_diffusion":
        return [[rate(u[0])] + carried(parameter("velocity"), u[0]) + spread(parameter("diffusivity")[0], u[0])]
    if equation == "dispersion":
        return [[rate(u[0]), parameter("dispersion")[0] * sp.diff(u[0], x, 3)]]
    if equation == "burgers":
        return [[rate(u[0])] + div([u[0] ** 2 / 2] * d) + spread(parameter("viscosity")[0], u[0])]
    if equation == "poisson":
        return [spread(parameter("conductivity")[0], u[0])]
    if equation == "acoustics":
        density, speed, mean = parameter("density")[0], parameter("sound_speed")[0], parameter("velocity")
        first = [rate(u[0])] + carried(mean, u[0]) + [density * speed**2 * term for term in div(u[1:])]
        return [first] + [[rate(v)] + carried(mean, v) + [slope / density] for v, slope in zip(u[1:], grad(u[0]))]
    if equation == "shallow_water":
        g, bed = parameter("gravity")[0], parameter("bed")[0]
        momentum = [
            [rate(q)] + div([q * other / u[0] for other in u[1:]]) + [sp.diff(g * u[0] ** 2 / 2, axis), g * u[0] * sp.diff(bed, axis)]
            for q, axis in zip(u[1:], AXES)
        ]
        return [[rate(u[0])] + div(u[1:])] + momentum
    if equation == "incompressible":
        v, p, nu = u[:d], u[d], parameter("viscosity")[0]
        momentum = [[rate(w)] + carried(v, w) + [slope] + spread(nu, w) for w, slope in zip(v, grad(p))]
        return momentum + [div(v)]
    return gas(equation, d, u, parameter, grad, div, rate)


def gas(equation, d, u, parameter, grad, div, rate):
    density, momentum, energy = u[0], u[1 : d + 1], u[d + 1]
    gamma = parameter("gamma")[0]
    v = [component / density for component in momentum]
    p = (gamma - 1) * (energy - sum(m * w for m, w in zip(momentum, v)) / 2)
    terms = [[rate(density)] + div(momentum)]
    terms += [[rate(m)] + div([m * w for w in v]) + [slope] for m, slope in zip(momentum, grad(p))]
    terms.append([rate(energy)] + div([(energy + p) * w for w in v]))
    if equation == "navier_stokes":
        mu, prandtl, constant = (parameter(name)[0] for name in ("viscosity", "prandtl", "gas_constant"))
        dilation = sum(div(v))
        stress = [
            [mu * (sp.diff(v[i], AXES[j]) + sp.diff(v[j], AXES[i]) - (sp.Rational(2, 3) * dilation if i == j else 0)) for j in range(d)]
            for i in range(d)
        ]
        for i in range(d):
            terms[i + 1] += [-term for term in div(stress[i])]
        conductivity = mu * gamma * constant / ((gamma - 1) * prandtl)
        heat = [conductivity * slope for slope in grad(p / (density * constant))]
        work = [sum(v[j] * stress[i][j] for j in range(d)) for i in range(d)]
        terms[d + 1] += [-term for term in div([work[i] + heat[i] for i in range(d)])]
    return terms


DEFAULTS = {("acoustics", "velocity"): 0, ("burgers", "viscosity"): 0, ("shallow_water", "bed"): 0, ("poisson", "conductivity"): 1}
