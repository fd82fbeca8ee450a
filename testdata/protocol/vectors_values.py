"""Value vectors: a declaration and a count -> the value in SI (SPEC 6.3).

Computed with exact fractions from the definitions: inch 0.0254 m, avoirdupois
pound 0.45359237 kg, standard gravity 9.80665 m/s2, 0 degrees Celsius 273.15 K
(NIST SP 811, 2008 edition, appendix B; BIPM SI brochure, 9th edition). Written
with 17 significant digits.
"""

from decimal import Decimal, localcontext
from fractions import Fraction

from wire import line

INCH = Fraction("0.0254")
LBF = Fraction("0.45359237") * Fraction("9.80665")
# pi to 40 places, from memory; checked below against the standard library.
PI = Fraction("3.1415926535897932384626433832795028841971")

UNITS = {  # (quantity, code): (factor, offset)
    ("pressure", "[psi]"): (LBF / INCH**2, 0),
    ("pressure", "Pa"): (1, 0),
    ("pressure", "kPa"): (1000, 0),
    ("pressure", "MPa"): (10**6, 0),
    ("pressure", "bar"): (10**5, 0),
    ("pressure", "mbar"): (100, 0),
    ("extension", "[in_i]"): (INCH, 0),
    ("extension", "mm"): (Fraction(1, 1000), 0),
    ("extension", "um"): (Fraction(1, 10**6), 0),
    ("extension", "m"): (1, 0),
    ("force", "N"): (1, 0),
    ("force", "kN"): (1000, 0),
    ("force", "[lbf_av]"): (LBF, 0),
    ("force", "kgf"): (Fraction("9.80665"), 0),
    ("torque", "N.m"): (1, 0),
    ("torque", "[ft_i].[lbf_av]"): (12 * INCH * LBF, 0),
    ("torque", "[in_i].[lbf_av]"): (INCH * LBF, 0),
    ("angle", "circ"): (2 * PI, 0),
    ("angle", "deg"): (PI / 180, 0),
    ("angle", "rad"): (1, 0),
    ("spring", "[in_i]"): (INCH, 0),
    ("spring", "mm"): (Fraction(1, 1000), 0),
    ("spring", "m"): (1, 0),
    ("temperature", "Cel"): (1, Fraction("273.15")),
    ("temperature", "[degF]"): (Fraction(5, 9), Fraction("459.67") * 5 / 9),
    ("temperature", "K"): (1, 0),
    ("voltage", "V"): (1, 0),
    ("voltage", "mV"): (Fraction(1, 1000), 0),
}


def digits(fraction):
    fraction = Fraction(fraction)
    with localcontext() as c:
        c.prec = 17
        return str(Decimal(fraction.numerator) / Decimal(fraction.denominator))


def value(name, clauses, quantity, unit, mantissa, exponent, count, res=1, zero=0):
    tail = (" res=%d" % res if res != 1 else "") + (" zero=%d" % zero if zero else "")
    factor, offset = UNITS[quantity, unit]
    step = Fraction(mantissa) * Fraction(10)**exponent * factor
    return {"name": name, "clauses": clauses,
            "chan": line("chan a %s %s %de%d lo=-9999999 hi=9999999 per=1%s"
                         % (quantity, unit, mantissa, exponent, tail)),
            "count": count, "si": digits((count - zero) * step + offset),
            "least_si": digits(abs(res * step))}


def vectors():
    import math
    assert float(PI) == math.pi
    each = [value("7240 tenths of %s of %s" % (u, q), ["6.2", "6.3"], q, u, 1, -1, 7240)
            for q, u in UNITS]
    return each + [
        value("count zero", ["6.3"], "pressure", "[psi]", 1, -1, 0),
        value("count zero of a temperature", ["6.3"], "temperature", "[degF]", 1, -1, 0),
        value("zero taken off before the scale", ["6.3"], "pressure", "kPa", 25, -2, 1000, zero=200),
        value("a count below zero", ["6.3"], "extension", "um", 5, -1, -40, zero=60),
        value("a scale that runs backwards", ["6.3"], "extension", "mm", -1, -3, 250),
        value("a least step of five", ["6.3", "6.4"], "extension", "[in_i]", 1, -4, 65, res=5),
        value("the extremes", ["6.3"], "pressure", "Pa", 9999999, 12, 9999999, zero=-9999999),
        value("the smallest", ["6.3"], "voltage", "mV", -9999999, -12, 1),
    ]
