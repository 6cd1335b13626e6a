"""Writes sine.txt: numerator and denominator of an angle in turns, its sine and cosine to 45 decimals.

Run with mpmath 1.3:  python3 make.py > sine.txt
"""
from mpmath import mp, mpf, sin, cos, pi

mp.dps = 70
ANGLES = [(k, 48) for k in range(-48, 97)] + [(k * k * 7919 + 1, 1_000_003) for k in range(60)] + [
    (1, 2**90), (-3, 2**100), (2**61 - 1, 2**64), (2**125 // 7, 2**122), (1, 8 * 10**9), (10**12 + 1, 8 * 10**12)]
for n, d in ANGLES:
    x = 2 * pi * mpf(n) / d
    print(n, d, mp.nstr(sin(x), 50, min_fixed=-99, max_fixed=99), mp.nstr(cos(x), 50, min_fixed=-99, max_fixed=99))
