"""The solutions that no finite formula gives, computed once more with mpmath and by other methods than the program's."""

from mpmath import mp, mpf

import sympy as sp


def value(text_or_number, names):
    """An argument of a solver as an mpf."""
    from formulas import number, read

    expression = number(text_or_number) if not isinstance(text_or_number, str) else read(text_or_number, names)
    return mpf(sp.N(expression, mp.dps + 5))


def solver(problem, names):
    """A function of (t, x, y) that gives the solver's fields in order."""
    entry = problem["exact"]
    argument = lambda name: value(entry[name], names)
    start = mpf(repr(problem["time"]["start"]))
    kind = entry["solver"]
    if kind == "riemann":
        sides = [[value(one, names) for one in entry[side]] for side in ("left", "right")]
        return riemann(*sides, value("gamma", names), argument("position"), start)
    if kind == "dam_break":
        return dam_break(argument("upstream"), argument("downstream"), value("gravity", names), argument("position"), start)
    if kind == "series":
        return series(problem, entry, argument, names)
    if kind == "swirl":
        return swirl(entry, argument, names)
    sine = [argument(name) for name in ("mean", "amplitude", "wavenumber", "phase")]
    if kind == "cole_hopf":
        return cole_hopf(*sine, value("viscosity", names), start)
    if kind == "characteristics":
        return lambda t, x, y=0: [characteristic(*sine, t - start, x)]
    return simple_wave(*sine, argument("density"), argument("pressure"), value("gamma", names), start)


def series(problem, entry, argument, names):
    from formulas import read

    axis = "xyz".index(entry["axis"])
    lower, upper = (mpf(repr(problem["domain"][end][axis])) for end in ("lower", "upper"))
    length, diffusivity = upper - lower, argument("diffusivity")
    base, slope = (argument(name) if name in entry else mpf(0) for name in ("base", "slope"))
    n = sp.Symbol("n")
    coefficient = sp.lambdify(n, read(entry["coefficient"], {**names, "n": n}), "mpmath")
    function = {"sine": mp.sin, "cosine": mp.cos}[entry["functions"]]

    def at(t, x, y=0):
        s = (x, y)[axis] - lower
        total, index = base + slope * s, entry["first"]
        while True:
            wavenumber = index * mp.pi / length
            decay = mp.exp(-diffusivity * wavenumber**2 * t)
            total += coefficient(mpf(index)) * function(wavenumber * s) * decay
            if decay < mpf(10) ** (-mp.dps - 5):
                return [total]
            index += entry["stride"]

    return at


def cole_hopf(mean, amplitude, wavenumber, phase, viscosity, start):
    """The Fourier series of the transform, with modified Bessel functions as coefficients."""
    z = amplitude / (2 * viscosity * wavenumber)

    def at(t, x, y=0):
        elapsed = t - start
        angle = wavenumber * (x - mean * elapsed) + phase
        # Where theta is small the series cancels by a factor of e^(2 |z|).
        with mp.extradps(int(2 * abs(z)) + 10):
            theta, slope, n = mp.besseli(0, z), mpf(0), 1
            while True:
                term = 2 * mp.besseli(n, z) * mp.exp(-viscosity * (n * wavenumber) ** 2 * elapsed)
                theta += term * mp.cos(n * angle)
                slope -= term * n * wavenumber * mp.sin(n * angle)
                if abs(term) * n < mpf(10) ** (-mp.dps):
                    return [mean - 2 * viscosity * slope / theta]
                n += 1

    return at


def characteristic(mean, amplitude, wavenumber, phase, elapsed, x):
    """u = mean + amplitude sin(k (x - u t) + phase) by fixed-point iteration, then Newton's method."""
    u = mean + amplitude * mp.sin(wavenumber * (x - mean * elapsed) + phase)
    for _ in range(200):
        angle = wavenumber * (x - u * elapsed) + phase
        step = (u - mean - amplitude * mp.sin(angle)) / (1 + amplitude * wavenumber * elapsed * mp.cos(angle))
        u -= step
        if abs(step) < mpf(10) ** (-mp.dps + 2):
            break
    return u


def simple_wave(mean, amplitude, wavenumber, phase, density, pressure, gamma, start):
    sound = mp.sqrt(gamma * pressure / density)

    def at(t, x, y=0):
        speed = characteristic(mean + sound, (gamma + 1) / 2 * amplitude, wavenumber, phase, t - start, x)
        excess = 2 / (gamma + 1) * (speed - mean - sound)
        local = sound + (gamma - 1) / 2 * excess
        rho = density * (local / sound) ** (2 / (gamma - 1))
        p = rho * local**2 / gamma
        u = mean + excess
        return [rho, rho * u, p / (gamma - 1) + rho * u**2 / 2]

    return at


def riemann(left, right, gamma, position, start):
    """The star pressure by bisection of the textbook function; sampling by the textbook's cases."""

    def change(p, state):
        rho, _, pk = state
        if p > pk:
            return (p - pk) * mp.sqrt(2 / ((gamma + 1) * rho) / (p + (gamma - 1) / (gamma + 1) * pk))
        return 2 * mp.sqrt(gamma * pk / rho) / (gamma - 1) * ((p / pk) ** ((gamma - 1) / (2 * gamma)) - 1)

    low, high = mpf(0), mpf(10) ** 7
    for _ in range(int(3.4 * mp.dps) + 40):
        middle = (low + high) / 2
        if change(middle, left) + change(middle, right) + right[1] - left[1] < 0:
            low = middle
        else:
            high = middle
    star = (low + high) / 2
    star_velocity = (left[1] + right[1] + change(star, right) - change(star, left)) / 2

    def side(state, xi, sign):
        """State at speed xi on one side of the contact; sign is +1 on the right."""
        rho, u, p = state
        a = mp.sqrt(gamma * p / rho)
        if star > p:
            shock = u + sign * a * mp.sqrt((gamma + 1) / (2 * gamma) * star / p + (gamma - 1) / (2 * gamma))
            g = (gamma - 1) / (gamma + 1)
            behind = (rho * (star / p + g) / (g * star / p + 1), star_velocity, star)
            return state if sign * (xi - shock) > 0 else behind
        star_sound = a * (star / p) ** ((gamma - 1) / (2 * gamma))
        if sign * (xi - u - sign * a) > 0:
            return state
        if sign * (xi - star_velocity - sign * star_sound) < 0:
            return (rho * (star / p) ** (1 / gamma), star_velocity, star)
        inside = (2 * a + sign * (gamma - 1) * (xi - u)) / (gamma + 1)
        velocity = (2 * xi + (gamma - 1) * u - sign * 2 * a) / (gamma + 1)
        return (rho * (inside / a) ** (2 / (gamma - 1)), velocity, p * (inside / a) ** (2 * gamma / (gamma - 1)))

    def at(t, x, y=0):
        xi = (x - position) / (t - start)
        rho, u, p = side(left, xi, -1) if xi < star_velocity else side(right, xi, 1)
        return [rho, rho * u, p / (gamma - 1) + rho * u**2 / 2]

    return at


def dam_break(upstream, downstream, gravity, position, start):
    celerity = mp.sqrt(gravity * upstream)
    middle = mpf(0)
    if downstream > 0:
        jump = lambda h: (h - downstream) * mp.sqrt(gravity * (h + downstream) / (2 * h * downstream))
        balance = lambda h: jump(h) - 2 * (celerity - mp.sqrt(gravity * h))
        middle = mp.findroot(balance, (downstream * mpf("1.001"), upstream), solver="anderson")
    velocity = 2 * (celerity - mp.sqrt(gravity * middle))
    tail = velocity - mp.sqrt(gravity * middle)
    bore = middle * velocity / (middle - downstream) if downstream > 0 else tail

    def at(t, x, y=0):
        xi = (x - position) / (t - start)
        if xi < -celerity:
            return [upstream, mpf(0)]
        if xi < tail:
            h = (2 * celerity - xi) ** 2 / (9 * gravity)
            return [h, h * 2 * (celerity + xi) / 3]
        return [middle, middle * velocity] if xi < bore else [downstream, mpf(0)]

    return at


def swirl(entry, argument, names):
    """Particles followed back by Taylor series of high order."""
    period, base, height, width = (argument(name) for name in ("period", "base", "height", "width"))
    centre = [value(one, names) for one in entry["centre"]]

    def at(t, x, y):
        # The flow is a steady one at the pace cos(pi t / period).
        pace = period / mp.pi * mp.sin(mp.pi * t / period)
        steps = max(1, int(mp.ceil(abs(pace) / mpf("0.03"))))
        angles = [2 * mp.pi * x, 2 * mp.pi * y]
        for _ in range(steps):
            angles = taylor_step(angles, -pace / steps)
        px, py = (angle / (2 * mp.pi) for angle in angles)
        return [base + height * mp.exp(-((px - centre[0]) ** 2 + (py - centre[1]) ** 2) / (2 * width**2))]

    return at


def taylor_step(angles, step):
    """a' = pi (1 - cos a) sin b, b' = -pi (1 - cos b) sin a, by recurrence of the coefficients; a = 2 pi x, b = 2 pi y."""
    order = mp.dps + 10
    a, b = ([angle] for angle in angles)
    sine, cosine = [[mp.sin(angle)] for angle in angles], [[mp.cos(angle)] for angle in angles]
    product = lambda p, q, k: mp.fsum(p[j] * q[k - j] for j in range(k + 1))
    for k in range(order):
        a.append(mp.pi * (sine[1][k] - product(cosine[0], sine[1], k)) / (k + 1))
        b.append(-mp.pi * (sine[0][k] - product(cosine[1], sine[0], k)) / (k + 1))
        for series, s, c in ((a, sine[0], cosine[0]), (b, sine[1], cosine[1])):
            s.append(mp.fsum(j * series[j] * c[k + 1 - j] for j in range(1, k + 2)) / (k + 1))
            c.append(-mp.fsum(j * series[j] * s[k + 1 - j] for j in range(1, k + 2)) / (k + 1))
    return [mp.polyval(series[::-1], step) for series in (a, b)]
