"""SymPy's derivative, common sub-expressions and C of the same source: prints seconds, operations before and after sharing."""

import time

import sympy as sp

start = time.process_time()
x, y = sp.symbols("x y", real=True)
R, pi, sin, cos = sp.Rational, sp.pi, sp.sin, sp.cos
gamma, gas, mu, prandtl = R(7, 5), R(287), R(10), R(1)
rho = 1 + R(1, 10) * sin(R(3, 4) * pi * x) + R(3, 20) * cos(pi * y) + R(2, 25) * cos(R(5, 4) * pi * x * y)
u = 70 + 4 * sin(R(5, 3) * pi * x) - 12 * cos(R(3, 2) * pi * y) + 7 * cos(R(3, 5) * pi * x * y)
v = 90 - 20 * cos(R(3, 2) * pi * x) + 4 * sin(pi * y) - 11 * cos(R(9, 10) * pi * x * y)
p = 100000 - 30000 * cos(pi * x) + 20000 * sin(R(5, 4) * pi * y) - 25000 * sin(R(3, 4) * pi * x * y)
energy = p / (gamma - 1) + rho * (u**2 + v**2) / 2
div = sp.diff(u, x) + sp.diff(v, y)
txx = mu * (2 * sp.diff(u, x) - R(2, 3) * div)
tyy = mu * (2 * sp.diff(v, y) - R(2, 3) * div)
txy = mu * (sp.diff(u, y) + sp.diff(v, x))
k = mu * gamma * gas / ((gamma - 1) * prandtl)
temperature = p / (rho * gas)
qx, qy = -k * sp.diff(temperature, x), -k * sp.diff(temperature, y)
sources = [
    sp.diff(rho * u, x) + sp.diff(rho * v, y),
    sp.diff(rho * u * u + p - txx, x) + sp.diff(rho * u * v - txy, y),
    sp.diff(rho * u * v - txy, x) + sp.diff(rho * v * v + p - tyy, y),
    sp.diff((energy + p) * u - u * txx - v * txy + qx, x) + sp.diff((energy + p) * v - u * txy - v * tyy + qy, y),
]
parts, results = sp.cse(sources)
code = [sp.ccode(e) for _, e in parts] + [sp.ccode(e) for e in results]
seconds = time.process_time() - start
before = sum(sp.count_ops(e) for e in sources)
after = sum(sp.count_ops(e) for _, e in parts) + sum(sp.count_ops(e) for e in results)
print(seconds, before, after)
