"""Transfer functions of random sets of equations with units, by Cramer's rule.

    python3 generate.py OUTDIR

writes systems.txt. The determinants are SymPy's, over the polynomials in s with
rational coefficients; the scales of units are the table below (SI Brochure).
Each case is five lines: the system in JSON, input, output, and the ascending
coefficients of numerator and denominator, nothing cancelled, up to a common
factor that is a number; then an empty line.
"""
import json
import pathlib
import sys
from fractions import Fraction

from sympy import QQ, symbols
from sympy.polys.matrices import DomainMatrix

MASK = (1 << 64) - 1
s = symbols("s")
ring = QQ[s]


def splitmix64(state):
    while True:
        state = (state + 0x9E3779B97F4A7C15) & MASK
        z = state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        yield z ^ (z >> 31)


words = splitmix64(4)


def below(n):
    return next(words) % n


# Units of length, of time and of current with their scales in SI units.
LENGTHS = {"m": Fraction(1), "mm": Fraction(1, 1000), "km": Fraction(1000), "cm": Fraction(1, 100)}
TIMES = {"s": Fraction(1), "ms": Fraction(1, 1000), "min": Fraction(60), "h": Fraction(3600)}
CURRENTS = {"A": Fraction(1), "mA": Fraction(1, 1000), "kA": Fraction(1000)}
QUANTITIES = [LENGTHS, CURRENTS]


def pick(table):
    names = list(table)
    return names[below(len(names))]


def decimal(q):
    """A decimal or a fraction that the library reads exactly."""
    return str(q.numerator) if q.denominator == 1 else f"{q.numerator}/{q.denominator}"


def case():
    n = 1 + below(5)
    kinds = [below(2) for _ in range(n + 1)]
    names = ["u"] + [f"x{i}" for i in range(n)]
    unit_names = [pick(QUANTITIES[k]) for k in kinds]
    scales = [QUANTITIES[k][u] for k, u in zip(kinds, unit_names)]
    constants, equations, rows = {}, [], []
    for i in range(n):
        left, right = [], []
        row = [ring.zero] * (n + 1)
        kind = below(2)  # of the equation: a length or a current
        for j in [i + 1] + [j for j in range(n + 1) if j != i + 1 and below(5) < 2]:
            order = below(3) if j == i + 1 else below(2)
            value = Fraction((1 + below(40)) * (-1) ** below(2), [1, 2, 3, 5, 8][below(5)])
            name = f"c{len(constants)}"
            si = value
            parts = []
            if kinds[j] != kind:
                a, b = pick(QUANTITIES[kind]), pick(QUANTITIES[kinds[j]])
                si *= QUANTITIES[kind][a] / QUANTITIES[kinds[j]][b]
                parts += [a]
                below_line = [b]
            else:
                below_line = []
            if order:
                unit = pick(TIMES)
                si *= TIMES[unit] ** order
                parts += [unit if order == 1 else f"{unit}^{order}"]
            text = "*".join(parts) or "1"
            if below_line:
                text += "/" + below_line[0]
            constants[name] = decimal(value) + ("" if text == "1" else " " + text)
            term = f"{name} {names[j]}" + "'" * order
            side, sign = (left, 1) if below(2) else (right, -1)
            if side and below(3) == 0:
                side.append(f"- {term}")
                sign = -sign
            else:
                side.append(f"+ {term}" if side else term)
            row[j] += ring.from_sympy(sign * QQ.to_sympy(QQ(si.numerator, si.denominator)) * s**order)
        equations.append((" ".join(left) or "0") + " = " + (" ".join(right) or "0"))
        rows.append(row)
    signals = dict(zip(names, unit_names))
    out = 1 + below(n)
    matrix = [row[1:] for row in rows]
    den = DomainMatrix(matrix, (n, n), ring).det()
    if not den:
        return None
    replaced = [row[1:out] + [-row[0]] + row[out + 1 :] for row in rows]
    num = DomainMatrix(replaced, (n, n), ring).det() * QQ(1) * ring.from_sympy(
        QQ.to_sympy(QQ((scales[0] / scales[out]).numerator, (scales[0] / scales[out]).denominator))
    )
    if not num:
        return None
    primes = below(3)
    num *= ring.from_sympy(s**primes)
    system = {"signals": signals, "constants": constants, "equations": equations}
    return "\n".join([json.dumps(system), "u", names[out] + "'" * primes, coefficients(num), coefficients(den), ""])


def coefficients(p):
    terms = {m[0]: c for m, c in p.terms()}
    out = []
    for k in range(max(terms) + 1):
        c = terms.get(k, QQ(0))
        out.append(f"{c.numerator}/{c.denominator}")
    return " ".join(out)


cases = []
while len(cases) < 120:
    c = case()
    if c:
        cases.append(c)
pathlib.Path(sys.argv[1], "systems.txt").write_text("\n".join(cases), encoding="utf-8", newline="\n")
