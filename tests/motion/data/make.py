"""Writes laws.txt: s and S of the laws to 45 decimals, for the tests beside it.

The formulas are the published displacement diagrams, written down here once more and on purpose not in the form that
the program uses; S is mpmath's numerical integral of s, so it checks the program's closed forms. The Bezier is solved by
mpmath's bisection. Run with mpmath 1.3:  python3 make.py > laws.txt
"""
from fractions import Fraction
from mpmath import mp, mpf, sin, cos, pi, quad

mp.dps = 70


def cubic(x): return x * x * (3 - 2 * x)
def quintic(x): return x**3 * (10 + x * (6 * x - 15))
def septic(x): return x**4 * (35 - 84 * x + 70 * x**2 - 20 * x**3)
def harmonic(x): return (1 - cos(pi * x)) / 2
def cycloidal(x): return x - sin(2 * pi * x) / (2 * pi)


def modified_trapezoid(x):
    d = 2 * pi * (2 + pi)
    if x > mpf(5) / 8:
        return 1 - modified_trapezoid(1 - x)
    if x <= mpf(1) / 8:
        return (4 * pi * x - sin(4 * pi * x)) / d
    if x <= mpf(3) / 8:
        return (16 * pi * x * (4 * pi * x - pi + 2) + pi**2 - 8) / (8 * d)
    return (4 * pi * (1 + pi) * x + sin(4 * pi * x) - pi**2) / d


def modified_sine(x):
    d = 4 * (4 + pi)
    if x <= mpf(1) / 8:
        return (4 * pi * x - sin(4 * pi * x)) / d
    if x <= mpf(7) / 8:
        return (8 + 4 * pi * x - 9 * sin((4 * pi * x + pi) / 3)) / d
    return (16 + 4 * pi * x - sin(4 * pi * x)) / d


LAWS = {
    "cubic": (cubic, []),
    "quintic": (quintic, []),
    "septic": (septic, []),
    "harmonic": (harmonic, []),
    "cycloidal": (cycloidal, []),
    "modified-sine": (modified_sine, [Fraction(1, 8), Fraction(7, 8)]),
    "modified-trapezoid": (modified_trapezoid, [Fraction(k, 8) for k in (1, 3, 5, 7)]),
}


def real(q): return mpf(q.numerator) / q.denominator


def skewed(law, lean):
    l = real(lean)
    m = 1 - l
    return lambda u: 2 * l * law(u / (2 * l)) if u <= l else 1 - 2 * m * law((1 - u) / (2 * m))


def cuts(breaks, lean):
    at = lambda b: 2 * lean * b if b <= Fraction(1, 2) else 1 - 2 * (1 - lean) * (1 - b)
    return sorted({at(b) for b in breaks} | {lean})


def bezier(x1, y1, x2, y2):
    def at(c1, c2, t): return 3 * c1 * t * (1 - t)**2 + 3 * c2 * t**2 * (1 - t) + t**3
    def parameter(u):
        low, high = mpf(0), mpf(1)
        for _ in range(260):
            middle = (low + high) / 2
            low, high = (middle, high) if at(x1, x2, middle) < u else (low, middle)
        return low
    def slope(t): return 3 * (x1 * (1 - t)**2 + 2 * (x2 - x1) * t * (1 - t) + (1 - x2) * t**2)
    def s(u): return at(y1, y2, parameter(u))
    def gain(u): return quad(lambda t: at(y1, y2, t) * slope(t), [0, parameter(u)])
    return s, gain


def show(name, setting, n, ticks, s, gain):
    print(name, setting, n, ticks, *(mp.nstr(v, 55, min_fixed=-99, max_fixed=99) for v in (s, gain)))


for name, (law, breaks) in LAWS.items():
    for lean in (Fraction(1, 2), Fraction(5, 100), Fraction(37, 100), Fraction(95, 100)):
        s = skewed(law, lean)
        inner = cuts(breaks, lean)
        for n, ticks in ((1, 7), (1234, 4099), (5, 11), (333_333, 499_999), (6, 7), (250_000_000_007, 250_000_000_011)):
            u = Fraction(n, ticks)
            path = [mpf(0)] + [real(c) for c in inner if c < u] + [real(u)]
            show(name, lean, n, ticks, s(real(u)), quad(s, path))

for points in (("0.25", "0.1", "0.25", "1"), ("0", "0", "0.58", "1"), ("0.42", "0", "1", "1"), ("1", "0", "0.000000001", "1"),
               ("0.5", "-1000000000", "0.5", "1000000000"), ("0.000000001", "0", "0.999999999", "1")):
    s, gain = bezier(*map(mpf, points))
    for n, ticks in ((1, 7), (1234, 4099), (1, 2), (6, 7), (1, 250_000_000_011)):
        u = mpf(n) / ticks
        show("bezier", ",".join(points), n, ticks, s(u), gain(u))
