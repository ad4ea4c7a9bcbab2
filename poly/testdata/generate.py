"""Greatest common divisors, resultants, square-free parts and real-root counts of
random polynomials, by SymPy. Usage: generate.py OUTDIR

Each line of algebra.txt holds, separated by semicolons: p; q; the monic gcd;
the resultant; the square-free factors of p as "factor^multiplicity" joined by
commas; the number of distinct real roots of p.
"""
import sys

from sympy import Poly, QQ, gcd, symbols, zeros

MASK = (1 << 64) - 1
x = symbols("x")


def splitmix64(state):
    while True:
        state = (state + 0x9E3779B97F4A7C15) & MASK
        z = state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        yield z ^ (z >> 31)


def random_poly(words, degree, size):
    """A polynomial with rational coefficients and a leading one that is not 0."""
    c = [(int(next(words) % (2 * size + 1)) - size, 1 + int(next(words) % 5)) for _ in range(degree)]
    c.append((1 + int(next(words) % size), 1 + int(next(words) % 5)))
    return Poly(sum(QQ(a, b) * x**i for i, (a, b) in enumerate(c)), x, domain=QQ)


def text(p):
    """Ascending coefficients."""
    return " ".join(str(c) for c in reversed(p.all_coeffs()))


def resultant(p, q):
    """The determinant of Sylvester's matrix. (SymPy's own function has the
    other sign for some pairs of odd degrees.)"""
    m, n = p.degree(), q.degree()
    matrix = zeros(m + n, m + n)
    for i in range(n):
        for j, c in enumerate(p.all_coeffs()):
            matrix[i, i + j] = c
    for i in range(m):
        for j, c in enumerate(q.all_coeffs()):
            matrix[n + i, i + j] = c
    return matrix.det()


def main(folder):
    words = splitmix64(20261201)
    with open(folder + "/algebra.txt", "w") as out:
        for k in range(120):
            small = k % 3 != 0
            size = 9 if small else 10**9
            common = random_poly(words, int(next(words) % 4), size)
            p = random_poly(words, 1 + int(next(words) % 5), size) * common
            q = random_poly(words, 1 + int(next(words) % 4), size) * common
            if k % 4 == 0:
                p = p * random_poly(words, 1, size) ** 2 * common
            _, factors = p.sqf_list()
            fs = ",".join(f"{text(f.monic())}^{m}" for f, m in sorted(factors, key=lambda t: t[1]))
            g = Poly(gcd(p, q), x, domain=QQ).monic()
            out.write(f"{text(p)};{text(q)};{text(g)};{resultant(p, q)};{fs};{p.count_roots()}\n")


main(sys.argv[1])
