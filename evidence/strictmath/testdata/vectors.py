#!/usr/bin/env python3
"""Writes vectors.csv: reference values of the functions of package strictmath, by mpmath with 60 digits.

Run as: python3 vectors.py > vectors.csv (ten minutes)
Needs mpmath 1.3 (https://mpmath.org, BSD licence), whose algorithms share nothing with this package.
Arguments are binary64 numbers in their shortest decimal form; values have 30 digits. Student's tail is had twice, from
mpmath's incomplete beta function and from numerical integration of the density, and both must agree: on a sample of the rows,
as the integration is slow.
"""
import random
from mpmath import mp, mpf

mp.dps = 60
rnd = random.Random(20240229)


def row(name, want, *args):
    args = [repr(float(a)) for a in args] + [""] * (2 - len(args))
    print(f"{name},{args[0]},{args[1]},{mp.nstr(want, 30, strip_zeros=False, min_fixed=0, max_fixed=0)}")


def log_uniform(low, high):
    return float(mp.exp(mpf(rnd.uniform(float(mp.log(low)), float(mp.log(high))))))


def ncdf(z):
    return mp.erfc(-mpf(z) / mp.sqrt(2)) / 2


def nquantile(p):
    p = mpf(p)
    z = mp.sqrt(2) * mp.erfinv(2 * p - 1) if 1e-10 < p < 1 - 1e-10 else -mp.sqrt(-2 * mp.log(min(p, 1 - p))) * mp.sign(mpf(0.5) - p)
    with mp.workdps(400):
        for _ in range(60):  # Halley's method
            f = mp.exp(-z * z / 2) / mp.sqrt(2 * mp.pi)
            step = (ncdf(z) - p) / f
            step = step / (1 + z * step / 2)
            z -= step
            if abs(step) < mpf(10) ** -50 * abs(z) or z == 0:
                return z
    raise ArithmeticError(p)


def density(nu):
    nu = mpf(nu)
    c = mp.exp(mp.loggamma((nu + 1) / 2) - mp.loggamma(nu / 2)) / mp.sqrt(nu * mp.pi)
    return lambda t: c * mp.exp(-(nu + 1) / 2 * mp.log1p(t * t / nu))


def tail(t, nu):
    """P(T > t), t > 0, by the incomplete beta function."""
    t, nu = mpf(t), mpf(nu)
    y = t * t / (nu + t * t)
    if y < 0.5 and nu < 1e4:  # from the centre
        s = mpf(0.5) - mp.betainc(0.5, nu / 2, 0, y, regularized=True) / 2
        if s > 1e-5:  # else it would cancel
            return s
    return mp.betainc(nu / 2, 0.5, 0, nu / (nu + t * t), regularized=True) / 2


def tail_by_quadrature(t, nu):
    """The same from the density: the substitution s = sqrt(nu (e^u - 1)) leaves a smooth, decaying integrand."""
    t, nu = mpf(t), mpf(nu)
    c = mp.exp(mp.loggamma((nu + 1) / 2) - mp.loggamma(nu / 2)) / mp.sqrt(mp.pi)
    u0 = mp.log1p(t * t / nu)
    # d = u - u0; e^(u0/2) is taken out of the root, because mpmath's quadrature judges its error absolutely
    low = -mp.expm1(-u0)
    g = lambda d: mp.exp(-(nu - 1) * d / 2) / mp.sqrt(mp.expm1(d) + low)
    # pieces that grow, from where the integrand varies first to where it has lost 65 digits
    step, end = 1 / ((nu + 1) / 2 + 1 / u0) / 4, 300 / nu
    points = [mpf(0), step]
    while points[-1] < end:
        points.append(points[-1] + step)
        step = min(step * 2, 10 / nu)
    scale = 1 / g(mpf(0))
    return c / 2 * mp.exp(-nu * u0 / 2) / scale * mp.quad(lambda d: scale * g(d), points)


def student_tail(t, nu):
    if nu <= 1e3:
        a = tail(t, nu)
        if rnd.random() < 0.15:
            b = tail_by_quadrature(t, nu)
            if abs(a - b) > mpf(10) ** -25 * a:
                raise ArithmeticError(f"tail {t} {nu}: {mp.nstr(a, 30)} and {mp.nstr(b, 30)}")
        return a
    return tail_by_quadrature(t, nu)


def student_quantile(p, nu):
    """p < 1/2 exactly as a binary number: minus the t with that upper tail, by bisection and then Newton's method."""
    q = mpf(p)
    f = density(nu)
    low, high = mpf(10) ** -40, mpf(1)
    while student_tail_plain(high, nu) > q:
        low, high = high, high * 4
    for _ in range(40):
        mid = mp.sqrt(low * high)
        if student_tail_plain(mid, nu) > q:
            low = mid
        else:
            high = mid
        if high < low * 1.01:
            break
    t = mp.sqrt(low * high)
    for _ in range(40):
        s = student_tail_plain(t, nu)
        step = s * mp.log(s / q) / f(t)
        t += step
        if abs(step) < mpf(10) ** -40 * t:
            return -t
    raise ArithmeticError((p, nu))


def student_tail_plain(t, nu):
    return tail(t, nu) if nu <= 1e3 else tail_by_quadrature(t, nu)


print("function,x,y,value")

for x in [1, -1, 0.5, 1e-300, -1e-10, 1e-8, 3.725290298461914e-09, -3.7e-9, 709.782712893384, 709.0, -708.5, -740.25, -745.0, -745.1]:
    row("Exp", mp.exp(mpf(x)), x)
for _ in range(300):
    x = rnd.uniform(-745, 709.7)
    row("Exp", mp.exp(mpf(x)), x)
for _ in range(150):
    x = rnd.choice([-1, 1]) * log_uniform(1e-12, 1)
    row("Exp", mp.exp(mpf(x)), x)

for x in [5e-324, 1e-310, 2.2250738585072014e-308, 1.7976931348623157e308, 0.5, 2, 10, 0.9999999999999999, 1.0000000000000002, 0.99, 1.01, 0.7071067811865476, 0.7071067811865475]:
    row("Log", mp.log(mpf(x)), x)
for _ in range(150):
    x = log_uniform(1e-308, 1e308)
    row("Log", mp.log(mpf(x)), x)
for _ in range(150):
    x = 1 + rnd.choice([-1, 1]) * log_uniform(1e-12, 0.5)
    row("Log", mp.log(mpf(x)), x)

for x, y in [(10, 300), (10, -300), (10, 22), (10, -5), (2, -1074), (2, -1060.5), (2, 1023.5), (1.0000000000000002, 1e17), (0.9999999999999999, 1e18), (1e-300, 1.02), (5e-324, 0.5), (5e-324, 0.3),
             (1.7976931348623157e308, 0.999), (3, 600), (0.1, 10), (1.1, 7000), (7, 0.3333333333333333), (1e308, 1e-10), (1.5, 1e-300)]:
    row("Pow", mp.power(mpf(x), mpf(y)), x, y)
for _ in range(400):
    x = log_uniform(1e-300, 1e300)
    y = rnd.uniform(-1, 1) * float(700 / abs(mp.log(x)))
    row("Pow", mp.power(mpf(x), mpf(y)), x, y)
for _ in range(150):
    x = 1 + rnd.choice([-1, 1]) * log_uniform(1e-12, 0.4)
    y = rnd.choice([-1, 1]) * log_uniform(0.01, float(700 / abs(mp.log(x))))
    row("Pow", mp.power(mpf(x), mpf(y)), x, y)

for x in [1e-308, 5e-324, 1e-300, 1e-17, 1e-9, 0.84375, 0.8437499999999999, 1.25, 1.2499999999999998, 2.857142857142857, 2.8571428571428577, 5.9]:
    row("Erf", mp.erf(mpf(x)), x)
    row("Erfc", mp.erfc(mpf(x)), x)
    row("Erf", mp.erf(mpf(-x)), -x)
    row("Erfc", mp.erfc(mpf(-x)), -x)
for x in [26.5, 26.543, 27, 27.2]:
    row("Erfc", mp.erfc(mpf(x)), x)
for _ in range(200):
    x = rnd.uniform(-6, 6)
    row("Erf", mp.erf(mpf(x)), x)
    row("Erfc", mp.erfc(mpf(x)), x)
    x = rnd.uniform(0, 26.5)
    row("Erfc", mp.erfc(mpf(x)), x)
    x = rnd.uniform(-26, 30)
    row("Erfcx", mp.exp(mpf(x) ** 2) * mp.erfc(mpf(x)), x)
    x = rnd.uniform(-1.5, 3)
    row("Erfcx", mp.exp(mpf(x) ** 2) * mp.erfc(mpf(x)), x)
for x in [1e-300, 1e-17, -1e-17, 1.25, 1.2499999999999998, 2.857142857142857, 27.999999999999996, 28, 50, 1000]:
    row("Erfcx", mp.exp(mpf(x) ** 2) * mp.erfc(mpf(x)), x)

for z in [1e-300, 1e-10, -1e-10, 1, -1, 1.645, -1.645, 8, -8, -20, -30, -37.5, -38.4]:
    row("NormCDF", ncdf(z), z)
    row("NormSF", ncdf(-mpf(z)), z)
for _ in range(200):
    z = rnd.uniform(-38.4, 8)
    row("NormCDF", ncdf(z), z)
    z = rnd.uniform(-5, 5)
    row("NormCDF", ncdf(z), z)
    row("NormSF", ncdf(-mpf(z)), z)

for p in [0.95, 0.975, 0.995, 0.05, 0.5000000000000001, 0.49999999999999994, 0.5000001, 0.925, 0.075, 0.9249999, 1e-300, 5e-324, 1e-310, 1e-20, 0.9999999999999999, 0.3]:
    row("NormQuantile", nquantile(p), p)
for _ in range(150):
    p = log_uniform(1e-300, 0.5)
    row("NormQuantile", nquantile(p), p)
    p = rnd.random()
    row("NormQuantile", nquantile(p), p)
    p = 0.5 + rnd.choice([-1, 1]) * log_uniform(1e-12, 0.4)
    row("NormQuantile", nquantile(p), p)

nus = [0.01, 0.1, 0.5, 1, 1.5, 2, 3, 4, 5, 7.3, 8, 10, 13.7, 19, 29.5, 31, 32, 33, 39, 40, 41, 60, 99.5, 100, 250, 1000]
for nu in nus:
    for t in [1e-10, 0.001, 0.1, 0.5, 1, 1.7, 2, 3, 4.5, 6, 10, 20, 37, 100, 1e4, 1e10, 1e100, 1e200, 1e300]:
        s = student_tail(t, nu)
        if s > mpf(10) ** -320:
            row("TSF", s, t, nu)
    for _ in range(8):
        t = rnd.uniform(0, 8)
        row("TSF", student_tail(t, nu), t, nu)
for nu in [1e4, 1e6, 123456.789, 1e9, 1e12, 1e20, 1e30]:
    for t in [0.001, 0.1, 0.5, 1, 1.7, 2, 3, 4.5, 6, 10, 20, 37]:
        row("TSF", student_tail(t, nu), t, nu)
for nu in [0.5, 1, 2, 3, 8, 10, 29.5, 100, 1000]:
    for p in [0.4999999, 0.4999, 0.45, 0.4, 0.3, 0.25, 0.1, 0.05, 0.025, 0.005, 1e-3, 1e-6, 1e-12, 1e-50, 1e-300]:
        row("TQuantile", student_quantile(p, nu), p, nu)
for nu in [0.1, 5.5, 1e4, 1e6, 1e9, 1e20]:
    for p in [0.45, 0.3, 0.05, 0.025, 0.005, 1e-6, 1e-12]:
        row("TQuantile", student_quantile(p, nu), p, nu)
