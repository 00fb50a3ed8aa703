"""One sine, the same bits on every machine.

The C library's sine differs in the last bit from one version to the next; a take could then not be rendered
again exactly.  This one is a polynomial: sin(2πq) = q · P(q²) on |q| ≤ 1/4, the rest by symmetry.
Error: below 4e-16.  Coefficients: Chebyshev fit of degree 7 in q², error of the fit 7.2e-16 relative to 2π.
"""

from math import copysign

from rtfx.native.options import inlined


@inlined
def sine(cycles):
    """Return sin(2π *cycles*) for *cycles* in [0, 1]."""
    t = cycles - 0.5
    q = copysign(0.25 - abs(abs(t) - 0.25), -t)
    s = q * q
    even = -0.6925067010720717
    even = even * s + 3.817365633469135
    even = even * s - 15.09450614073429
    even = even * s + 42.05868995395094
    even = even * s - 76.70585968962867
    even = even * s + 81.60524927557977
    even = even * s - 41.341702240398284
    even = even * s + 6.283185307179585
    return q * even
