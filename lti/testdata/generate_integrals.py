"""Transfer functions of random sets of equations with integrals, by Cramer's rule.

    python3 generate_integrals.py OUTDIR

writes integrals.txt. Every integral is a further unknown q here, with the
equation s·q = what is integrated, so that each adds one mode at 0; the
determinants of the larger set are SymPy's, over the polynomials in s with
rational coefficients. Each case is five lines: the system in JSON, input,
output, and the ascending coefficients of numerator and denominator, nothing
cancelled, up to a common factor that is a number; then an empty line.
"""
import json
import pathlib
import sys
from fractions import Fraction

from sympy import QQ, symbols
from sympy.polys.matrices import DomainMatrix

MASK = (1 << 64) - 1
ring = QQ[symbols("s")]
s = ring.gens[0]


def splitmix64(state):
    while True:
        state = (state + 0x9E3779B97F4A7C15) & MASK
        z = state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        yield z ^ (z >> 31)


words = splitmix64(11)


def below(n):
    return next(words) % n


LENGTHS = {"m": Fraction(1), "mm": Fraction(1, 1000), "km": Fraction(1000), "cm": Fraction(1, 100)}
TIMES = {"s": Fraction(1), "ms": Fraction(1, 1000), "min": Fraction(60), "h": Fraction(3600)}


def pick(table):
    names = list(table)
    return names[below(len(names))]


def rational(f):
    return QQ(f.numerator, f.denominator)


class Case:
    def __init__(self):
        self.n = 1 + below(4)
        self.names = ["u"] + [f"x{i}" for i in range(self.n)]
        self.units = [pick(LENGTHS) for _ in self.names]
        self.constants, self.rows = {}, []  # a row is {unknown: polynomial}
        self.extra = 0  # unknowns for integrals

    def constant(self, power):
        """A constant in seconds to a power, as a name and its value in SI."""
        value = Fraction((1 + below(30)) * (-1) ** below(2), [1, 2, 3, 5, 8][below(5)])
        text, si = f"{value}", value
        if power:
            unit = pick(TIMES)
            text += f" {unit}" if power == 1 else f" {unit}^{power}"
            si *= TIMES[unit] ** power
        name = f"c{len(self.constants)}"
        self.constants[name] = text
        return name, rational(si)

    def sum(self, depth, must=None):
        """A sum of lengths as text and as {unknown: polynomial}."""
        text, row = [], {}
        chosen = [j for j in range(self.n + 1) if j == must or below(5) < 2] or [below(self.n + 1)]
        for j in chosen:
            order = below(3) if j == must else below(2)
            name, value = self.constant(order)
            text.append(f"{name} {self.names[j]}" + "'" * order)
            row[j] = row.get(j, ring.zero) + value * s**order
        if depth < 3 and below(3) < 2 - depth:
            name, value = self.constant(-1)
            q = f"q{self.extra}"
            self.extra += 1
            inner, integrand = self.sum(depth + 1)
            # The derivative of an integral is no integral any more; that of the
            # rest, integrated, is an integrator like any other.
            primes = below(3) == 0 and "integral" not in inner
            if primes:
                second, factor = self.constant(1)
                text.append(f"{name} integral({second} ({inner})')")
                integrand = {k: factor * s * v for k, v in integrand.items()}
            else:
                text.append(f"{name} integral({inner})")
            row[q] = value
            self.rows.append({k: -v for k, v in integrand.items()} | {q: s})
        return " + ".join(text), row

    def determinant(self, columns, replace=None):
        """The determinant of some columns; None stands for the one to replace by."""
        matrix = [[row.get(replace if c is None else c, ring.zero) for c in columns] for row in self.rows]
        return DomainMatrix(matrix, (len(matrix), len(columns)), ring).det()


def case():
    c = Case()
    equations = []
    for i in range(c.n):
        left, row = c.sum(0, must=i + 1)
        right, other = "0", {}
        if below(2):
            name, value = c.constant(0)
            j = below(c.n + 1)
            right, other = f"{name} {c.names[j]}", {j: value}
        for k, v in other.items():
            row[k] = row.get(k, ring.zero) - v
        c.rows.append(row)
        equations.append(f"{left} = {right}")
    if not c.extra:
        return None
    columns = [j for j in range(1, c.n + 1)] + [f"q{k}" for k in range(c.extra)]
    den = c.determinant(columns)
    out = 1 + below(c.n)
    replaced = [None if j == out else j for j in columns]
    num = -c.determinant(replaced, replace=0)
    if not den or not num:
        return None
    num *= rational(LENGTHS[c.units[0]] / LENGTHS[c.units[out]])
    system = {"signals": dict(zip(c.names, c.units)), "constants": c.constants, "equations": equations}
    return "\n".join([json.dumps(system), "u", c.names[out], coefficients(num), coefficients(den), ""])


def coefficients(p):
    terms = {m[0]: c for m, c in p.terms()}
    out = [terms.get(k, QQ(0)) for k in range(max(terms) + 1)]
    return " ".join(f"{c.numerator}/{c.denominator}" for c in out)


cases = []
while len(cases) < 80:
    c = case()
    if c:
        cases.append(c)
pathlib.Path(sys.argv[1], "integrals.txt").write_text("\n".join(cases), encoding="utf-8", newline="\n")
