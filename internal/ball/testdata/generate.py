"""Writes functions.txt: reference values of elementary functions from mpmath,
to 1200 bits. Usage: python3 generate.py OUTDIR

A line holds the function, its arguments and its value; a number m * 2^e is
written "m:e" in decimal, the value with a mantissa of 1200 bits.
"""
import os
import sys
from mpmath import mp, mpf

STATE = 20240229


def splitmix64():
    global STATE
    STATE = (STATE + 0x9E3779B97F4A7C15) & (2**64 - 1)
    z = STATE
    z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & (2**64 - 1)
    z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & (2**64 - 1)
    return z ^ (z >> 31)


def dyadic(span):
    m = (splitmix64() >> (splitmix64() % 50)) | 1
    return (-m if splitmix64() & 1 else m), splitmix64() % (2 * span + 1) - span - m.bit_length()


def text(v):
    sign, man, exp, _ = v._mpf_
    return "%d:%d" % (-man if sign else man, exp)


EXTREME = [(1, 0), (-1, 0), (1, 1), (1, -1), (3, 0), (1, -1074), (-1, -1074), (1, 1023), (1, -3000), (1, 3000),
           (2**53 - 1, 971), (2**53 - 1, -53), (2**53 + 1, -53), (2**200 + 1, -200), (2**400 - 1, -400),
           # close to multiples of pi/2: the hardest double (Kahan; recomputed by mpmath here), convergents
           (6381956970095103, 797), (355, 0), (103993, 0), (245850922, -1), (411557987, -1), (1, 16000), (-5, 9000)]


def main(outdir):
    one = {"exp": mp.exp, "log": mp.log, "sin": mp.sin, "cos": mp.cos, "atan": mp.atan, "sqrt": mp.sqrt,
           "sinh": mp.sinh, "cosh": mp.cosh}
    with open(os.path.join(outdir, "functions.txt"), "w") as out:
        for name, f in one.items():
            args = list(EXTREME)
            for span in (3, 8, 20, 60):
                args += [dyadic(span) for _ in range(12)]
            for m, e in args:
                size = abs(m).bit_length() + e
                if name in ("log", "sqrt"):
                    m = abs(m)
                if name in ("exp", "sinh", "cosh") and size > 24:
                    continue
                mp.prec = 1300 + 3 * max(0, -size) + max(0, size) + 500
                x = mp.ldexp(mpf(m), e)
                v = f(x)
                mp.prec = 1200
                out.write("%s %d:%d %s\n" % (name, m, e, text(+v)))
        for span in (2, 10, 100):
            for _ in range(20):
                y, x = dyadic(span), dyadic(span)
                mp.prec = 2200
                v = mp.atan2(mp.ldexp(mpf(y[0]), y[1]), mp.ldexp(mpf(x[0]), x[1]))
                mp.prec = 1200
                out.write("atan2 %d:%d,%d:%d %s\n" % (y[0], y[1], x[0], x[1], text(+v)))


main(sys.argv[1])
