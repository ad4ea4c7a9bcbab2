"""Magnitude, decibels, phase and group delay on the imaginary axis, correctly
rounded, by mpmath at 400 bits from functions that are made of known factors.

    python3 generate_frequency.py OUTDIR

Each line of frequency.txt: numerator; denominator (ascending, rationals); dead
time; omega; magnitude, decibels, phase and group delay as hexadecimal floats.
The phase follows the rules of FrequencyFunction.Phase: the angles of factors
1 - s/z add up, each 0 at omega = 0.
"""
import pathlib
import sys
from fractions import Fraction

import mpmath

mpmath.mp.prec = 400
MASK = (1 << 64) - 1


def splitmix64(state):
    while True:
        state = (state + 0x9E3779B97F4A7C15) & MASK
        z = state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        yield z ^ (z >> 31)


words = splitmix64(21)


def below(n):
    return next(words) % n


def mpf(q):
    q = Fraction(q)
    return mpmath.mpf(q.numerator) / q.denominator


def rounded(v):
    sign, man, exp, _ = mpmath.mpf(v)._mpf_
    q = (-1) ** sign * Fraction(int(man)) * Fraction(2) ** exp
    return (q.numerator / q.denominator).hex()


def times(p, q):
    out = [Fraction(0)] * (len(p) + len(q) - 1)
    for i, a in enumerate(p):
        for j, b in enumerate(q):
            out[i + j] += a * b
    return out


def side():
    """Factors, and their product: roots as (sigma, nu), nu > 0 for a pair."""
    roots, p = [], [Fraction(1)]
    for _ in range(below(4)):
        kind = below(6)
        sigma = Fraction(below(40) - 30, 1 + below(7))
        nu = Fraction(1 + below(60), 1 + below(7))
        if kind == 0:
            sigma, nu = Fraction(0), Fraction(0)
        elif kind in (1, 2):
            nu = Fraction(0)
        elif kind == 3:
            sigma = Fraction(0)
        elif kind == 4:
            sigma = sigma / 10**9
        if nu == 0:
            p = times(p, [-sigma, 1])
        else:
            p = times(p, [sigma * sigma + nu * nu, -2 * sigma, 1])
        roots.append((sigma, nu))
    return roots, p


def angle(roots, w):
    total, negative = mpmath.mpf(0), False
    for sigma, nu in roots:
        if sigma == 0 and nu == 0:
            total += mpmath.pi / 2
        elif sigma == 0:
            total += mpmath.pi if w > nu else 0
        else:
            for n in {nu, -nu}:
                total -= mpmath.atan((mpf(w) - mpf(n)) / mpf(sigma)) + mpmath.atan(mpf(n) / mpf(sigma))
            negative ^= nu == 0 and sigma > 0  # -sigma is the constant term
    return total, negative


def evaluate(p, w):
    v = mpmath.mpc(0)
    for c in reversed(p):
        v = v * mpmath.mpc(0, mpf(w)) + mpf(c)
    return v


def delay(roots, w):
    """-d(angle)/dw of the factors s - z."""
    total = mpmath.mpf(0)
    for sigma, nu in roots:
        if sigma != 0:
            for n in {nu, -nu}:
                total += mpf(sigma) / (mpf(sigma) ** 2 + (mpf(w) - mpf(n)) ** 2)
    return total


def main():
    lines = []
    while len(lines) < 300:
        zeros, num = side()
        poles, den = side()
        k = Fraction(below(200) - 99, 1 + below(30)) or Fraction(1)
        num = [k * c for c in num]
        dead = Fraction(below(300), 1 + below(40)) if below(3) == 0 else Fraction(0)
        w = float(Fraction(1 + below(1 << 40)) / 2 ** (30 + below(12)))
        if below(8) == 0:
            w = float(1 + below(60))
        w = Fraction(w)
        a, b = evaluate(num, w), evaluate(den, w)
        if a == 0 or b == 0:
            continue
        magnitude = abs(a / b)
        top, odd = angle(zeros, w)
        bottom, odd2 = angle(poles, w)
        phase = top - bottom - mpf(dead) * mpf(w)
        if odd ^ odd2 ^ (k < 0):
            phase -= mpmath.pi
        group = mpf(dead) + delay(zeros, w) - delay(poles, w)
        lines.append("; ".join([
            " ".join(map(str, num)), " ".join(map(str, den)), str(dead), float(w).hex(),
            " ".join(rounded(v) for v in (magnitude, 20 * mpmath.log10(magnitude), phase, group))]))
    out = pathlib.Path(sys.argv[1]) / "frequency.txt"
    out.write_text("\n".join(lines) + "\n")


main()
