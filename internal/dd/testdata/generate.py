"""Tables of internal/dd, by mpmath.

    python3 generate.py OUTDIR

writes tables.txt, from which tables.go was made: the same numbers as a Go
source, so that nothing is computed when a program starts.
"""
import sys
from fractions import Fraction

from mpmath import mp, mpf

mp.dps = 80


def nearest(x):
    """x as a float64, nearest."""
    sign, man, exp, _ = x._mpf_
    return (-1 if sign else 1) * float(Fraction(int(man)) * Fraction(2) ** int(exp)) if man else 0.0


def pair(x):
    h = nearest(x)
    return h, nearest(x - mpf(h))


def parts(x, bits, count):
    """x in count parts, all but the last truncated to a number of bits."""
    out = []
    for _ in range(count - 1):
        e = mp.frexp(x)[1] - bits
        v = mpf(int(x / mpf(2) ** e)) * mpf(2) ** e
        out.append(float(v))
        x -= v
    return out + [nearest(x)]


def main():
    rows = ["const ("]
    for name, v in zip("abc", parts(mp.log(2) / 64, 36, 3)):
        rows.append(f"\tln2{name} = {v.hex()}")
    for name, v in zip("abcd", parts(mp.pi / 128, 26, 4)):
        rows.append(f"\tpi{name} = {v.hex()}")
    for name, v in zip("HL", pair(mpf(1) / 6)):
        rows.append(f"\tsixth{name} = {v.hex()}")
    rows += [")", "", "// powers holds 2^(j/64).", "var powers = [64][2]float64{"]
    rows += ["\t{%s, %s}," % tuple(v.hex() for v in pair(mpf(2) ** (mpf(j) / 64))) for j in range(64)]
    rows += ["}", "", "// sines holds sin(j·π/128).", "var sines = [256][2]float64{"]
    for j in range(256):
        x = mpf(0) if j % 128 == 0 else mpf((-1) ** (j // 128)) if j % 128 == 64 else mp.sin(mp.pi * j / 128)
        rows.append("\t{%s, %s}," % tuple(v.hex() for v in pair(x)))
    rows.append("}")
    with open(sys.argv[1] + "/tables.txt", "w") as out:
        out.write("\n".join(rows) + "\n")


main()
