"""Writes roots.txt: polynomials with the correctly rounded values of their
roots, computed with mpmath at 110 digits and more.

Usage: python3 generate.py OUTDIR

A line of the file is "family;coefficients;roots": ascending integer
coefficients separated by spaces, and roots "re,im,multiplicity" (floats in
hexadecimal), ordered by real part, then by absolute imaginary part, then
positive imaginary part first. A component beyond the range of a float is inf.

The roots come from formulas where the family has one, and otherwise from a
simultaneous iteration whose result is accepted only where the discs of radius
n|p/p'| around the n approximations are disjoint and below 1e-70 relative.
"""
import os
import sys
from fractions import Fraction

from mpmath import cos, log, mp, mpc, mpf, pi, sin, sqrt

MASK = (1 << 64) - 1
mp.dps = 110


class Stream:
    """The generator splitmix64 (Steele, Lea & Flood 2014)."""

    def __init__(self, seed):
        self.state = seed

    def word(self):
        self.state = (self.state + 0x9E3779B97F4A7C15) & MASK
        z = self.state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        return z ^ (z >> 31)

    def between(self, low, high):
        return low + self.word() % (high - low + 1)

    def signed(self, bits):
        v = self.word() & ((1 << bits) - 1)
        return -v if self.word() & 1 else v


def mul(p, q):
    out = [0] * (len(p) + len(q) - 1)
    for i, a in enumerate(p):
        if a:
            for j, b in enumerate(q):
                out[i + j] += a * b
    return out


def power(p, n):
    out = [1]
    for _ in range(n):
        out = mul(out, p)
    return out


def gcd(a, b):
    while b:
        a, b = b, a % b
    return a


def starts(p):
    n = len(p) - 1
    points = [(i, log(abs(mpf(c)))) for i, c in enumerate(p) if c]
    hull = []
    for q in points:
        while len(hull) > 1 and (hull[-1][1] - hull[-2][1]) * (q[0] - hull[-2][0]) <= (q[1] - hull[-2][1]) * (hull[-1][0] - hull[-2][0]):
            hull.pop()
        hull.append(q)
    out = []
    for h in range(1, len(hull)):
        (a, u), (b, v) = hull[h - 1], hull[h]
        r = mp.exp((u - v) / (b - a))
        for j in range(b - a):
            t = 2 * pi * (mpf(j) / (b - a) + mpf(h) / n) + mpf("0.7")
            out.append(mpc(r * cos(t), r * sin(t)))
    return out


def solve(p, digits=110):
    """Simple roots of an integer polynomial with p(0) != 0."""
    n = len(p) - 1
    mp.dps = digits
    c = [mpf(x) for x in p]
    z = starts(p)
    done = [False] * n

    def newton(x):
        b, d = c[n], mpf(0)
        for k in range(n - 1, -1, -1):
            d = d * x + b
            b = b * x + c[k]
        return b, d

    for _ in range(200):
        for i in range(n):
            if done[i]:
                continue
            v, d = newton(z[i])
            s = mpc(0)
            for k in range(n):
                if k != i:
                    s += 1 / (z[i] - z[k])
            step = v / (d - v * s)
            z[i] -= step
            done[i] = abs(step) < abs(z[i]) * mpf(10) ** (-digits * 8 // 11)
        if all(done):
            break
    radius = [n * abs(v / d) for v, d in map(newton, z)]
    for i in range(n):
        assert radius[i] < abs(z[i]) * mpf(10) ** -70, (p, z[i], radius[i])
        for k in range(i):
            assert abs(z[i] - z[k]) > 4 * n * (radius[i] + radius[k])
    mp.dps = 110
    return z


def rounded(x):
    """Division of integers rounds correctly, subnormal results included."""
    sign, man, exp, _ = mpf(x)._mpf_
    try:
        v = float(Fraction(man) * Fraction(2) ** exp)
    except OverflowError:
        v = float("inf")
    return -v if sign else v


def snapped(z, digits):
    """Components below 10^-digits of the size are 0."""
    z = mpc(z)
    size = abs(z) * mpf(10) ** -digits
    re = 0.0 if abs(z.real) < size else rounded(z.real)
    im = 0.0 if abs(z.imag) < size else rounded(z.imag)
    return re, im


def write(file, family, p, roots, digits=60):
    """roots: pairs of value and multiplicity."""
    found = [snapped(z, digits) + (m,) for z, m in roots]
    assert sum(m for _, _, m in found) == len(p) - 1
    found.sort(key=lambda r: (r[0], abs(r[1]), -r[1]))
    text = " ".join(f"{re.hex()},{im.hex()},{m}" for re, im, m in found)
    file.write(f"{family};{' '.join(map(str, p))};{text}\n")


def simple(file, family, p, digits=110):
    write(file, family, p, [(z, 1) for z in solve(p, digits)], digits * 6 // 11)


def quadratic(a, b, c):
    """Roots of a + b s + c s^2."""
    a, b, c = (mpf(Fraction(v).numerator) / Fraction(v).denominator for v in (a, b, c))
    d = b * b - 4 * a * c
    r = sqrt(mpc(d))
    return [(-b + r) / (2 * c), (-b - r) / (2 * c)]


def random_polynomials(file):
    r = Stream(1)
    for n, count in ((2, 30), (3, 30), (4, 30), (6, 20), (8, 20), (12, 10), (16, 6), (24, 3)):
        for _ in range(count):
            p = [r.signed(32) for _ in range(n + 1)]
            p[n] |= 1
            p[0] |= 1
            simple(file, "random", p)
    for n in (5, 10):
        for _ in range(10):
            simple(file, "small coefficients", [1] + [r.between(-3, 3) for _ in range(n - 1)] + [1])
    for n, bits in ((6, 200), (9, 700)):
        for _ in range(6):
            p = [sum(r.word() << (64 * i) for i in range(bits // 64 + 1)) for _ in range(n + 1)]
            simple(file, "long coefficients", [-c if r.word() & 1 else c for c in p])


def wilkinson(file):
    p = [1]
    for k in range(1, 21):
        p = mul(p, [-k, 1])
    write(file, "wilkinson", p, [(mpf(k), 1) for k in range(1, 21)])
    p = [c * 2**23 for c in p]
    p[19] -= 1
    simple(file, "wilkinson perturbed", p, 140)


def mignotte(file):
    for n, k in ((8, 10), (12, 20), (16, 10), (20, 14)):
        a = 2**k
        p = [-2, 4 * a, -2 * a * a] + [0] * (n - 3) + [1]
        simple(file, "mignotte", p, 110 + n * k // 2)


def orthogonal(file):
    for n in (20, 50, 100, 200):
        a, b = [1], [0, 1]
        for _ in range(n - 1):
            c = [0] + [2 * x for x in b]
            for i, x in enumerate(a):
                c[i] -= x
            a, b = b, c
        write(file, "chebyshev", b, [(cos(pi * (2 * k + 1) / (2 * n)), 1) for k in range(n)])
    for n in (20, 50, 100, 200):
        a, b = [Fraction(1)], [Fraction(0), Fraction(1)]
        for k in range(1, n):
            c = [Fraction(0)] + [Fraction(2 * k + 1, k + 1) * x for x in b]
            for i, x in enumerate(a):
                c[i] -= Fraction(k, k + 1) * x
            a, b = b, c
        roots = []
        for k in range(n // 2):
            x = cos(pi * (4 * k + 3) / (4 * n + 2))
            for _ in range(9):
                u, v = mpf(1), x
                for j in range(1, n):
                    u, v = v, ((2 * j + 1) * x * v - j * u) / (j + 1)
                d = n * (x * v - u) / (x * x - 1)
                x -= v / d
            assert abs(v / d) < mpf(10) ** -90
            roots += [(x, 1), (-x, 1)]
        write(file, "legendre", [int(c * 2**n) for c in b], roots)


def clusters(file):
    r = Stream(2)
    for n in (2, 3, 4, 6):
        # rational roots 1e-12 apart
        roots = [Fraction(r.between(1, 9)) + Fraction(k, 10**12) for k in range(n)]
        base = roots[0].limit_denominator(1)
        roots = [base + Fraction(k, 10**12) for k in range(n)]
        p = [1]
        for x in roots:
            p = mul(p, [-x.numerator, x.denominator])
        write(file, "cluster rational", p, [(mpf(x.numerator) / x.denominator, 1) for x in roots])
        # (s^2 + s + 1 + k e-12), a cluster of pairs, with a lone root
        p, roots = [3, 1], [(mpf(-3), 1)]
        for k in range(n):
            q = [10**12 + k, 10**12, 10**12]
            p = mul(p, q)
            roots += [(z, 1) for z in quadratic(*q)]
        write(file, "cluster complex", p, roots)
        # roots 1e-12 apart on a circle: (s - 2)^n = 1e-12^n
        p = power([-2, 1], n)
        p = [c * 10 ** (12 * n) for c in p]
        p[0] -= 1
        e = mpf(10) ** -12
        write(file, "cluster circle", p,
              [(2 + e * mpc(cos(2 * pi * k / n), sin(2 * pi * k / n)), 1) for k in range(n)])


def multiple(file):
    p = mul(power([1, 1], 5), power([5, 2, 1], 3))
    write(file, "multiple", p, [(mpf(-1), 5), (mpc(-1, 2), 3), (mpc(-1, -2), 3)])
    r = Stream(3)
    for case in range(12):
        p, roots, seen = [1], [], set()
        for m in (1, 2, 3, 5, 8)[: 2 + case % 4]:
            q = (r.between(1, 40), r.between(-12, 12), r.between(1, 9))
            disc = q[1] ** 2 - 4 * q[0] * q[2]
            g = gcd(gcd(q[0], q[1]), q[2])
            q = tuple(x // g for x in q)
            if q in seen or disc == 0 or (disc > 0 and int(sqrt(disc)) ** 2 == disc):
                continue
            seen.add(q)
            p = mul(p, power(list(q), m))
            roots += [(z, m) for z in quadratic(*q)]
        write(file, "multiple", p, roots)
    p = mul(power([1, 2], 64), power([-2, 0, 1], 3))
    write(file, "multiplicity 64", p, [(mpf(-0.5), 64), (sqrt(2), 3), (-sqrt(2), 3)])


def decades(file):
    r = Stream(4)
    for case in range(12):
        n = 3 + case % 6
        p = []
        for _ in range(n + 1):
            e = r.between(-300, 300)
            c = Fraction(r.between(1, 10**6)) * (Fraction(10) ** e)
            p.append(-c if r.word() & 1 else c)
        den = Fraction(10) ** 300
        p = [int(c * den) for c in p]
        g = 0
        for c in p:
            g = gcd(g, abs(c))
        p = [c // g for c in p]
        if all(p):
            simple(file, "decades", p, 2500)


def engineering(file):
    # lightly damped structures: 20 modes, damping ratio 1e-6
    for modes in (4, 20):
        p, roots = [1], []
        for k in range(modes):
            w = Fraction(10 + 7 * k * k + k, 10)
            q = [w * w, 2 * w / 10**6, Fraction(1)]
            roots += [(z, 1) for z in quadratic(*q)]
            den = 100 * 10**6
            p = mul(p, [int(c * den) for c in q])
        write(file, "lightly damped", p, roots)
    # undamped: imaginary pairs, with a real factor
    p, roots = [7, 5], [(mpf(-7) / 5, 1)]
    for k in range(1, 6):
        p = mul(p, [3 * k * k + 1, 0, 2])
        roots += [(z, 1) for z in quadratic(3 * k * k + 1, 0, 2)]
    write(file, "undamped", p, roots)
    # time constants over 15 decades
    p, roots = [1], []
    for k in range(16):
        a, b = 3 * 10**k, 7
        p = mul(p, [a, b])
        roots.append((-mpf(a) / b, 1))
    write(file, "stiff", p, roots)
    p, roots = [1], []
    for k in range(8):
        q = [10 ** (2 * k), 10**k, 1]
        p = mul(p, q)
        roots += [(z, 1) for z in quadratic(*q)]
    write(file, "stiff", p, roots)
    # a pole beside a zero: 1 + 1e-9 s beside 1 + 1.000001e-9 s
    p = mul(mul([10**9, 1], [10**15, 1000001]), mul([13, 4, 1], [1, 1]))
    roots = [(-mpf(10) ** 9, 1), (-mpf(10) ** 15 / 1000001, 1), (mpf(-1), 1)]
    write(file, "near-cancelling", p, roots + [(z, 1) for z in quadratic(13, 4, 1)])


def main():
    with open(os.path.join(sys.argv[1], "roots.txt"), "w") as file:
        for family in (random_polynomials, wilkinson, mignotte, orthogonal, clusters, multiple, decades, engineering):
            family(file)


if __name__ == "__main__":
    main()
