"""Reference values of inverse Laplace transforms, by mpmath.

    python3 generate_timefunction.py OUTDIR

writes timefunction.txt: one block per function,

    function FAMILY
    num INTEGER…            ascending coefficients
    den INTEGER…
    T Y                     one line per point, hexadecimal float64

Every Y is the value at the float64 T, rounded once: it is computed with at
least 80 digits, and again with twice as many until both round alike. The
denominator is known in factors, so that multiplicities are given and every
root is simple; near t = 0 the Taylor series serves as an independent path.
"""
import sys
from fractions import Fraction

import mpmath
from mpmath import mp, mpf, mpc

MASK = (1 << 64) - 1


class Random:
    """splitmix64 (Steele, Lea, Flood 2014)."""

    def __init__(self, seed):
        self.state = seed

    def word(self):
        self.state = (self.state + 0x9E3779B97F4A7C15) & MASK
        z = self.state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        return z ^ (z >> 31)

    def below(self, n):
        return self.word() % n

    def between(self, a, b):
        return a + self.below(b - a + 1)

    def unit(self):
        return (self.word() >> 11) / (1 << 53)


def mul(p, q):
    out = [0] * (len(p) + len(q) - 1)
    for i, a in enumerate(p):
        for j, b in enumerate(q):
            out[i + j] += a * b
    return out


def product(factors):
    out = [1]
    for f, m in factors:
        for _ in range(m):
            out = mul(out, f)
    return out


def shift(p, x, k):
    """The first k Taylor coefficients of p about x."""
    c = [mpc(a) for a in p] + [mpc(0)] * max(0, k - len(p))
    n = len(p) - 1
    for i in range(min(k, n)):
        for j in range(n - 1, i - 1, -1):
            c[j] += x * c[j + 1]
    return c[:k]


class Function:
    def __init__(self, family, num, factors):
        self.family, self.num, self.factors = family, num, factors
        self.den = product(factors)
        self.cache = {}

    def parts(self, digits):
        if digits not in self.cache:
            mp.dps = digits
            out = []
            for f, m in self.factors:
                if len(f) == 2:
                    roots = [mpc(-mpf(f[0]) / f[1])]
                elif len(f) == 3:
                    root = mpmath.sqrt(mpc(f[1] * f[1] - 4 * f[0] * f[2]))
                    roots = [(-f[1] + root) / (2 * f[2]), (-f[1] - root) / (2 * f[2])]
                else:
                    roots = mpmath.polyroots([mpf(a) for a in reversed(f)], maxsteps=200, extraprec=4 * digits)
                for r in roots:
                    r = mpc(r)
                    n, d = shift(self.num, r, m), shift(self.den, r, 2 * m)[m:]
                    c = []
                    for i in range(m):
                        c.append((n[i] - sum(d[j] * c[i - j] for j in range(1, i + 1))) / d[0])
                    out.append((r, c[::-1]))
            self.cache[digits] = out
        return self.cache[digits]

    def exact(self, t, digits):
        y = mpc(0)
        parts = self.parts(digits)
        mp.dps = digits
        t = mpf(t)
        for r, c in parts:
            y += sum(v * t**k / mpmath.factorial(k) for k, v in enumerate(c)) * mpmath.exp(r * t)
        return y.real

    def series(self, t, digits):
        mp.dps = digits
        n, t, mu, y, power, k = len(self.den) - 1, mpf(t), [], mpf(0), mpf(1), 0
        while True:
            v = mpf(self.num[n - 1 - k]) if 0 <= n - 1 - k < len(self.num) else mpf(0)
            v -= sum(self.den[n - i] * mu[k - i] for i in range(1, min(k, n) + 1))
            mu.append(v / self.den[n])
            term = mu[-1] * power
            y += term
            k += 1
            power *= t / k
            if k > n and abs(term) <= abs(y) * mpf(10) ** -(digits + 5):
                return y

    def at(self, t):
        value = self.series if self.family == "near zero" else self.exact
        digits, last = 80, None
        while digits < 20000:
            v = nearest(value(t, digits))
            if v == last:
                return v
            last = v
            digits *= 2
        raise ValueError("undecided")


def nearest(x):
    sign, man, exp, _ = x._mpf_
    if man == 0:
        return 0.0
    if exp < -4000 and int(man).bit_length() + exp < -1100:
        return 0.0
    f = Fraction(int(man)) * Fraction(2) ** int(exp)
    return (-1 if sign else 1) * float(f) + 0.0


def linear(r):
    return [r.between(1, 30), r.between(1, 9)]


def quadratic(r):
    a, b = r.between(0, 20), r.between(1, 20)  # (k s + a)² + b²
    k = r.between(1, 5)
    return [a * a + b * b, 2 * a * k, k * k]


def irreducible(r):
    return [r.between(5, 60), r.between(10, 60), r.between(10, 40), r.between(5, 9), 1][: r.between(3, 5)]


def numerator(r, degree):
    return [r.between(-50, 50) for _ in range(degree)] + [r.between(1, 50)]


def spread(r, count, low, high):
    """Times, logarithmically spread from 10^low to 10^high."""
    return [10 ** (low + (high - low) * r.unit()) for _ in range(count)]


def functions(r):
    for i in range(64):
        distinct = {}
        while sum((len(f) - 1) for f in distinct) < 1 + i % 8:
            f = (linear, quadratic, irreducible)[r.below(3)](r)
            distinct[tuple(f)] = 1
        factors = [(list(f), 1) for f in distinct]
        n = sum(len(f) - 1 for f, _ in factors)
        yield Function("random", numerator(r, r.below(n)), factors), spread(r, 20, -3, 2)
    for i in range(16):  # poles −a, −a−1e−12, …
        base = r.between(1, 5) * 10**12
        factors = [([base + j, 10**12], 1 + i // 8) for j in range(2 + i % 4)]
        if i >= 3:
            factors.append(([base, r.between(0, 9), 10**12], 1))
        yield Function("cluster", numerator(r, 1), factors), spread(r, 16, -6, 2)
    for i in range(6):  # complex pairs that differ by 1e−12
        factors = [([5 * 10**12 + j, 2 * 10**12, 10**12], 1) for j in range(2 + i % 5)]
        yield Function("cluster", numerator(r, 2), factors), spread(r, 16, -4, 2)
    for i in range(6):
        factors = [([10**max(k, 0), 10**max(-k, 0)], 1) for k in range(-7, 9, 1 + i % 5)]
        yield Function("stiff", numerator(r, r.below(len(factors))), factors), spread(r, 20, -10, 8)
    for i in range(5):  # ζ = 1e−6, order 40
        factors = [([10**6 * k * k, 2 * k, 10**6], 1) for k in range(1 + i, 21 + i)]
        yield Function("lightly damped", numerator(r, 39 - i), factors), spread(r, 15, -2, 5)
    for m in (2, 3, 4, 5, 6, 8, 9, 12, 16, 24):
        factors = [([r.between(1, 4), 1], m)]
        if m % 2 == 1:
            factors.append((quadratic(r), 1 + m // 2))
        yield Function("multiple", numerator(r, m - 1), factors), spread(r, 16, -3, 2)
    yield Function("multiple", [1], [([1, 1, 1], 8), ([0, 1], 3)]), spread(r, 16, -2, 2)
    for i in range(12):
        factors = [(linear(r), 1 + i % 3), (quadratic(r), 1)]
        yield Function("near zero", numerator(r, i % 3), factors), [2.0**-k for k in (1070, 1000, 300, 80, 40, 27, 15, 9)] + spread(r, 8, -20, -3)
    for i in range(4):  # subnormal values and beyond
        factors = [([r.between(1, 9), 1], 1 + i), ([r.between(20, 90), 2, 1], 1)]
        yield Function("underflow", numerator(r, 1), factors), [700 + 3.0 * k for k in range(16)] + [1e5, 1e300]
    for i in range(8):
        factors = [([r.between(2, 50), 0, 1], 1), ([r.between(1, 9), 1], 1)]
        yield Function("late", numerator(r, 2), factors), spread(r, 12, 5, 25)
    for i in range(6):
        factors = [([-r.between(1, 5), 1], 1 + i % 3), ([r.between(5, 9), -1, 1], 1)]
        yield Function("growing", numerator(r, 2), factors), spread(r, 12, -1, 2) + [1e3, 1e6]
    for i in range(8):  # zero and pole 1e−14 apart
        factors = [([10**14, 10**14], 1), ([r.between(2, 9), 1], 1), ([0, 1], 1)]
        yield Function("near cancellation", [10**14 + r.between(1, 9), 10**14], factors), spread(r, 14, -2, 2)


def crossings(r):
    """The float64 nearest to a zero of the response, and its neighbours."""
    for i in range(16):
        factors = [([r.between(10, 90), r.between(1, 3), 1], 1), (linear(r), 1)]
        f = Function("crossing", numerator(r, i % 3), factors)
        times = []
        last, step = None, 1 / 64
        for k in range(1, 400):
            v = f.exact(k * step, 30)
            if last is not None and v * last < 0 and len(times) < 18:
                mp.dps = 40
                zero = float(mpmath.findroot(lambda x: f.exact(x, 40), ((k - 1) * step, k * step), solver="anderson", tol=1e-30))
                ulp = abs(zero) * 2.0**-52
                times += [zero, zero - ulp, zero + ulp]
            last = v
        yield f, times


def main():
    r = Random(29)
    with open(sys.argv[1] + "/timefunction.txt", "w") as out:
        for source in (functions(r), crossings(r)):
            for f, times in source:
                lines = []
                for t in times:
                    try:
                        lines.append(f"{t.hex()} {f.at(t).hex()}\n")
                    except OverflowError:
                        lines.append(f"{t.hex()} range\n")
                out.write(f"function {f.family}\nnum {' '.join(map(str, f.num))}\nden {' '.join(map(str, f.den))}\n")
                out.writelines(lines)


if __name__ == "__main__":
    main()
