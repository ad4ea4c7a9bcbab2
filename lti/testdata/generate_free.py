"""Free responses of random sets of equations with units, from initial values.

    python3 generate_free.py OUTDIR

writes free.txt. The transform of the equations A(D) x = 0 is A(s) X(s) =
sum over k of a_k (s^(k-1) x(0) + s^(k-2) x'(0) + ...), which is linear in the
initial values of all derivatives below the highest. They are consistent where
every X is strictly proper and begins, expanded at infinity, with the values
that were put in; that is one more linear set, whose null space SymPy finds over
the rationals. Values are a random point of it. Values in time are those of the
companion matrix by mpmath.

Each case is a line for the system in JSON, a line for the inputs, a line for
the initial values in JSON, and for each signal a line: its name, numerator and
denominator of its transform in its unit (ascending coefficients, in lowest
terms), and values at 3 and 20 s; then an empty line.
"""
import json
import pathlib
import sys
from fractions import Fraction

import mpmath
from sympy import QQ, symbols
from sympy.polys.matrices import DomainMatrix

mpmath.mp.dps = 60
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


words = splitmix64(23)


def below(n):
    return next(words) % n


LENGTHS = {"m": Fraction(1), "mm": Fraction(1, 1000), "cm": Fraction(1, 100)}


def pick(table):
    names = list(table)
    return names[below(len(names))]


def rational(f):
    return QQ(f.numerator, f.denominator)


def dense(p):
    terms = {m[0]: c for m, c in p.terms()} if p else {}
    return [terms.get(k, QQ(0)) for k in range(max(terms, default=-1) + 1)]


def tail(p, i):
    """The sum of a_k s^(k-1-i) for k > i."""
    return sum((c * s ** (k - 1 - i) for k, c in enumerate(dense(p)) if k > i), ring.zero)


def expansion(num, den, n):
    """The coefficients of s^0, 1/s, ... 1/s^n of num/den and its polynomial part."""
    quotient, _ = divmod(num * s**n, den)
    c = dense(quotient)
    c += [QQ(0)] * (n + 1 - len(c))
    return c[n::-1], c[n + 1 :]


def case():
    n = 1 + below(4)
    names = [f"x{i}" for i in range(n)]
    units = [pick(LENGTHS) for _ in names]
    constants, equations, a, integrals = {}, [], [], False
    for i in range(n):
        row, text, depth = {}, [], 0
        for j in [i] + [j for j in range(n) if j != i and below(5) < 2]:
            order = below(3) if j == i else below(4) - 1
            depth = max(depth, -order)
            value = Fraction((1 + below(9)) * (-1) ** (below(4) == 0 or j != i and below(2)), [1, 2, 5][below(3)])
            name = f"c{len(constants)}"
            constants[name] = f"{value}" + (f" s^{order}" if order else "")
            text.append(f"{name} " + (f"integral({names[j]})" if order < 0 else names[j] + "'" * order))
            row[j, order] = rational(value)
        integrals = integrals or depth > 0
        equations.append(" + ".join(text) + (" = 0" if below(2) else " = f"))
        polynomials = [ring.zero] * n
        for (j, order), c in row.items():
            polynomials[j] += c * s ** (order + depth)
        a.append(polynomials)
    if not any(q.endswith("f") for q in equations):
        return None
    matrix = DomainMatrix(a, (n, n), ring)
    den = matrix.det()
    if not den or den.degree() < 1:
        return None
    adjugate = [[ring.zero] * n for _ in range(n)]
    for i in range(n):
        for j in range(n):
            minor = [[a[k][l] for l in range(n) if l != j] for k in range(n) if k != i]
            m = DomainMatrix(minor, (n - 1, n - 1), ring).det() if n > 1 else ring.one
            adjugate[j][i] = m * (-1) ** (i + j)
    order = [max((row[j].degree() for row in a if row[j]), default=0) for j in range(n)]
    unknowns = [(j, i) for j in range(n) for i in range(order[j])]
    most = max(order) + 1
    columns, transforms = [], []
    for j, i in unknowns:  # a unit value of the i-th derivative of x_j
        right = [tail(row[j], i) for row in a]
        x = [sum((adjugate[k][l] * right[l] for l in range(n)), ring.zero) for k in range(n)]
        transforms.append(x)
        column = []
        for k in range(n):
            start, improper = expansion(x[k], den, most)
            improper += [QQ(0)] * (8 - len(improper))
            column += [start[0]] + improper[:8]
            assert not any(improper[8:])
            for m in range(order[k]):
                column.append(start[m + 1] - QQ(int((k, m) == (j, i))))
        columns.append(column)
    if not unknowns:
        return None
    conditions = DomainMatrix([list(r) for r in zip(*columns)], (len(columns[0]), len(columns)), QQ)
    basis = conditions.nullspace().to_Matrix().tolist()
    assert len(basis) == den.degree(), "as many free values as roots"
    weights = [Fraction(below(19) - 9, 1 + below(3)) for _ in basis]
    values = [sum((w * Fraction(int(v[k].p), int(v[k].q)) for w, v in zip(weights, basis)), Fraction(0)) for k in range(len(unknowns))]
    lines = [json.dumps({"signals": dict(zip(names, units)) | {"f": "m"}, "constants": constants, "equations": equations}), "f"]
    given = []
    for (j, i), v in zip(unknowns, values):
        q = v / LENGTHS[units[j]]
        given.append([names[j] + "'" * i, f"{q} {units[j]}" + ("" if i == 0 else f"*s^-{i}")])
    lines.append(json.dumps(given))
    for k in range(n):
        num = sum((rational(v) * x[k] for v, x in zip(values, transforms)), ring.zero)
        num *= rational(1 / LENGTHS[units[k]])
        g = ring.gcd(num, den)
        n1, d1 = num // g, den // g
        lines.append(" | ".join([names[k], coefficients(n1), coefficients(d1), course(n1, d1, 3), course(n1, d1, 20)]))
    return "\n".join(lines + [""])


def coefficients(p):
    return " ".join(f"{c.numerator}/{c.denominator}" for c in dense(p)) or "0/1"


def course(num, den, t):
    """The inverse transform at t, by the exponential of the companion matrix,
    the Taylor series of one 64th of the time applied 64 times: no root is needed."""
    d = [mpmath.mpf(int(c.numerator)) / int(c.denominator) for c in dense(den)]
    c = [mpmath.mpf(int(v.numerator)) / int(v.denominator) for v in dense(num)]
    n = len(d) - 1
    if n == 0:
        return "0.0"
    d = [x / d[-1] for x in d]
    lead = mpmath.mpf(int(dense(den)[-1].numerator)) / int(dense(den)[-1].denominator)
    c = [x / lead for x in c] + [mpmath.mpf(0)] * (n - len(c))
    m = mpmath.matrix(n, n)
    for i in range(n - 1):
        m[i, i + 1] = 1
    for i in range(n):
        m[n - 1, i] = -d[i]
    with mpmath.workdps(120):
        state = mpmath.matrix(n, 1)
        state[n - 1] = 1
        step = mpmath.mpf(t) / 64
        term, total = mpmath.eye(n), mpmath.eye(n)
        k = 0
        while mpmath.mnorm(term, 1) > mpmath.mpf(10) ** -110 * mpmath.mnorm(total, 1) or k < 4:
            k += 1
            term = term * m * step / k
            total += term
        for _ in range(64):
            state = total * state
        return mpmath.nstr(sum(c[i] * state[i] for i in range(n)), 25)


cases = []
while len(cases) < 60:
    c = case()
    if c:
        cases.append(c)
pathlib.Path(sys.argv[1], "free.txt").write_text("\n".join(cases), encoding="utf-8", newline="\n")
