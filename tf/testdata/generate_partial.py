"""Reference expansions into partial fractions, by SymPy and mpmath.

    python3 generate_partial.py OUTDIR

writes partialfractions.txt: one block per function,

    function
    num INTEGER…            ascending coefficients
    den INTEGER…
    rational POWER | FACTOR… | NUMERATOR…       from sympy.apart, the factor monic
    pole RE IM POWER RE IM  hexadecimal float64: pole, power and coefficient

where "pole" lines come from mpmath, each component rounded once from 80 and
again from 160 digits.
"""
import sys

import mpmath
import sympy

sys.dont_write_bytecode = True
from generate_timefunction import Function, Random, irreducible, linear, nearest, numerator, quadratic

s = sympy.Symbol("s")


def polynomial(coefficients):
    return sympy.Poly(list(reversed(coefficients)), s)


def apart(num, den):
    expression = sympy.apart(polynomial(num).as_expr() / polynomial(den).as_expr(), s)
    for term in sympy.Add.make_args(expression):
        n, d = sympy.fraction(sympy.together(term))
        n, d = sympy.Poly(n, s), sympy.Poly(d, s)
        if d.degree() == 0:
            continue
        lead, factors = d.factor_list()
        (f, power), = factors
        scale = f.LC() ** power * lead
        yield power, f.monic(), n.as_expr() / scale


def ascending(p):
    return " ".join(str(c) for c in reversed(sympy.Poly(p, s).all_coeffs()))


def poles(f):
    """(pole, power, coefficient) rounded, from two precisions that agree."""
    rows = []
    for digits in (80, 160):
        rows.append([])
        for pole, c in f.parts(digits):
            for k, v in enumerate(c):
                rows[-1].append([nearest(clean(x, digits)) for x in (pole.real, pole.imag)] + [k + 1]
                                + [nearest(clean(x, digits)) for x in (v.real, v.imag)])
        rows[-1].sort()
    assert rows[0] == rows[1], (f.num, f.den)
    return rows[0]


def clean(x, digits):
    """Components that vanish come out as noise of the working precision."""
    return mpmath.mpf(0) if abs(x) < mpmath.mpf(10) ** (-digits // 2) else x


def main():
    r = Random(31)
    with open(sys.argv[1] + "/partialfractions.txt", "w") as out:
        for i in range(40):
            distinct = {}
            while len(distinct) < 1 + i % 4:
                f = (linear, quadratic, linear, irreducible)[r.below(4)](r)
                p = polynomial(f)
                if len(p.factor_list()[1]) == 1 and sympy.Poly(p, s).is_irreducible:
                    distinct[tuple(p.primitive()[1].all_coeffs()[::-1])] = 1 + r.below(3) * (len(f) < 4)
            factors = [([int(c) for c in f], m) for f, m in distinct.items()]
            degree = sum((len(f) - 1) * m for f, m in factors)
            f = Function("", numerator(r, r.below(degree + 2)), factors)
            g = sympy.gcd(polynomial(f.num), polynomial(f.den))
            if g.degree() > 0:
                continue
            out.write(f"function\nnum {' '.join(map(str, f.num))}\nden {' '.join(map(str, f.den))}\n")
            for power, factor, n in apart(f.num, f.den):
                out.write(f"rational {power} | {ascending(factor)} | {ascending(n)}\n")
            for a, b, k, c, d in poles(f):
                out.write(f"pole {a.hex()} {b.hex()} {k} {c.hex()} {d.hex()}\n")


main()
