"""Read between samples: the cubic through four of them (Lagrange).

    y = Σ w_k · s_k,   w_k = Π_{j≠k} (u − j) / (k − j),   k = 0…3

*u* is where to read, in samples from the first of the four.  At u = 0, 1, 2, 3 one weight is exactly 1, the
others are 0.
Limits: between the middle two, a tone of ω radians a sample comes out wrong by at most 0.0235 ω⁴ of its
amplitude; between the outer ones by at most 0.0417 ω⁴.
Source: Lagrange's formula and its remainder, Π (u − k) · ω⁴ / 4!; T. I. Laakso, V. Välimäki, M. Karjalainen,
U. K. Laine, "Splitting the Unit Delay", IEEE Signal Processing Magazine, 1996 (from memory).
"""

from rtfx.native.options import inlined


@inlined
def lagrange(u):
    """Return the four weights for a reading *u* samples after the first."""
    b, c, d = u - 1.0, u - 2.0, u - 3.0
    return -(b * c * d) / 6.0, 0.5 * (u * c * d), -0.5 * (u * b * d), u * b * c / 6.0
