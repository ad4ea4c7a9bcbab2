"""Values of transfer functions at complex points, each component correctly
rounded: exact rational arithmetic for the quotient (Python's fractions) and
mpmath at 1400 bits for the factor exp(-T s).

    python3 generate_values.py OUTDIR

Each line of values.txt: numerator; denominator (ascending, rationals); dead
time; the point and the value as hexadecimal floats, real and imaginary part.
"""
import pathlib
import sys
from fractions import Fraction

import mpmath

mpmath.mp.prec = 1400
MASK = (1 << 64) - 1


def splitmix64(state):
    while True:
        state = (state + 0x9E3779B97F4A7C15) & MASK
        z = state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        yield z ^ (z >> 31)


words = splitmix64(20)


def below(n):
    return next(words) % n


def rational():
    return Fraction(below(2001) - 1000, 1 + below(99)) * Fraction(10) ** (below(7) - 3)


def polynomial(degree):
    c = [rational() for _ in range(degree + 1)]
    if c[-1] == 0:
        c[-1] = Fraction(1)
    return c


def number(spread):
    m = below(1 << 53)
    return float((-m if below(2) else m) * Fraction(2) ** (below(2 * spread + 1) - spread - 53))


def evaluate(c, x, y):
    re = im = Fraction(0)
    for a in reversed(c):
        re, im = re * x - im * y + a, re * y + im * x
    return re, im


def fraction(v):
    """The exact value of an mpf."""
    sign, man, exp, _ = v._mpf_
    return (-1) ** sign * Fraction(int(man)) * Fraction(2) ** exp


def mpf(q):
    return mpmath.mpf(q.numerator) / q.denominator


def rounded(q):
    try:
        return (q.numerator / q.denominator).hex()  # true division rounds correctly
    except OverflowError:
        return "inf"


def main():
    lines = []
    for case in range(400):
        num, den = polynomial(below(7)), polynomial(below(9))
        delay = Fraction(below(500), 1 + below(40)) if case % 3 == 0 else Fraction(0)
        spread = 60 if case % 5 == 4 and delay == 0 else 8
        x, y = number(spread), number(spread)
        if case % 7 == 1:
            x = 0.0
        if case % 7 == 2:
            y = 0.0
        a, b = evaluate(num, Fraction(x), Fraction(y))
        c, d = evaluate(den, Fraction(x), Fraction(y))
        norm = c * c + d * d
        if norm == 0:
            continue
        re, im = (a * c + b * d) / norm, (b * c - a * d) / norm
        if delay:
            e = mpmath.exp(-mpf(delay) * mpf(Fraction(x)))
            angle = mpf(delay) * mpf(Fraction(y))
            cos, sin = e * mpmath.cos(angle), e * mpmath.sin(angle)
            re, im = fraction(mpf(re) * cos + mpf(im) * sin), fraction(mpf(im) * cos - mpf(re) * sin)
        lines.append("; ".join([
            " ".join(map(str, num)), " ".join(map(str, den)), str(delay),
            f"{x.hex()} {y.hex()}", f"{rounded(re)} {rounded(im)}"]))
    out = pathlib.Path(sys.argv[1]) / "values.txt"
    out.write_text("\n".join(lines) + "\n")


main()
