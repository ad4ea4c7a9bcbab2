"""Writes gnu_units.txt: the scales of units by GNU units (Debian package units).

Usage: python3 generate.py OUTDIR

Each line: the symbol in this library, a tab, its name in GNU units with the
coherent unit asked for, a tab, the value that GNU units gives.
"""
import os
import subprocess
import sys

# symbol here, expression for GNU units, coherent unit
ROWS = [
    ("N", "newton", "kg m/s^2"), ("Pa", "pascal", "kg/m s^2"), ("J", "joule", "kg m^2/s^2"), ("W", "watt", "kg m^2/s^3"),
    ("C", "coulomb", "A s"), ("V", "volt", "kg m^2/s^3 A"), ("F", "farad", "A^2 s^4/kg m^2"), ("ohm", "ohm", "kg m^2/s^3 A^2"),
    ("S", "siemens", "s^3 A^2/kg m^2"), ("Wb", "weber", "kg m^2/s^2 A"), ("T", "tesla", "kg/s^2 A"), ("H", "henry", "kg m^2/s^2 A^2"),
    ("Bq", "becquerel", "1/s"), ("Gy", "gray", "m^2/s^2"), ("Sv", "sievert", "m^2/s^2"), ("kat", "katal", "mol/s"),
    ("min", "minute", "s"), ("h", "hour", "s"), ("d", "day", "s"), ("au", "astronomicalunit", "m"), ("ha", "hectare", "m^2"),
    ("L", "liter", "m^3"), ("t", "tonne", "kg"), ("eV", "electronvolt", "kg m^2/s^2"),
    ("deg", "degree", "radian"), ("arcmin", "arcmin", "radian"), ("arcsec", "arcsec", "radian"), ("rev", "revolution", "radian"),
    ("rpm", "revolution/minute", "radian/s"), ("Hz", "revolution/s", "radian/s"),
    ("in", "inch", "m"), ("ft", "foot", "m"), ("yd", "yard", "m"), ("mi", "mile", "m"), ("nmi", "nauticalmile", "m"), ("mil", "mil", "m"),
    ("acre", "43560 ft^2", "m^2"), ("lb", "pound", "kg"), ("oz", "ounce", "kg"), ("slug", "slug", "kg"),
    ("lbf", "lbf", "kg m/s^2"), ("kgf", "kgf", "kg m/s^2"), ("dyn", "dyne", "kg m/s^2"), ("gn", "gravity", "m/s^2"),
    ("psi", "psi", "kg/m s^2"), ("ksi", "1000 psi", "kg/m s^2"), ("bar", "bar", "kg/m s^2"), ("atm", "atm", "kg/m s^2"),
    ("Torr", "torr", "kg/m s^2"), ("mmH2O", "kilogram force/m^2", "kg/m s^2"),
    ("hp", "horsepower", "kg m^2/s^3"), ("gal", "usgallon", "m^3"), ("bbl", "barrel", "m^3"), ("gpm", "usgallon/minute", "m^3/s"),
    ("cfm", "ft^3/minute", "m^3/s"), ("Btu", "btu_IT", "kg m^2/s^2"), ("cal", "calorie_th", "kg m^2/s^2"), ("Wh", "watt hour", "kg m^2/s^2"),
    ("Ah", "ampere hour", "A s"), ("erg", "erg", "kg m^2/s^2"), ("degF", "degF", "K"), ("degR", "degrankine", "K"),
    ("knot", "knot", "m/s"), ("mph", "mile/hour", "m/s"), ("cP", "centipoise", "kg/m s"), ("cSt", "centistokes", "m^2/s"),
    ("kWh", "kilowatt hour", "kg m^2/s^2"), ("N*m/rad", "newton m/radian", "kg m^2/s^2 radian"),
    ("m^3/(s*mm)", "m^3/(s mm)", "m^2/s"), ("mN*m/A", "millinewton meter/A", "kg m^2/s^2 A"),
]


def main(out):
    lines = []
    for symbol, expression, coherent in ROWS:
        value = subprocess.run(["units", "--terse", "--strict", "--output-format", "%.15g", expression, coherent],
                               check=True, capture_output=True, text=True, env={**os.environ, "LC_ALL": "C"}).stdout.split()[0]
        lines.append(f"{symbol}\t{expression} in {coherent}\t{value}\n")
    with open(os.path.join(out, "gnu_units.txt"), "w", encoding="utf-8") as f:
        f.writelines(lines)


if __name__ == "__main__":
    main(sys.argv[1])
