"""State-variable filter: two integrators in a loop, which keeps its pitch and stays stable while it is moved.

    g = tan(π · cutoff / rate),  k = 1 / q
    band = (g (x − s2) + s1) / (1 + g (g + k)),   low = s2 + g · band
    high = x − k · band − low,   notch = x − k · band
    s1 ← 2 band − s1,   s2 ← 2 low − s2

It equals the analogue filter of second order under the bilinear transform, with the cutoff in its right place.
State: s1 and s2, what the two integrators hold.  Limits: the cutoff is held below 0.49 of the rate, where the
tangent would run off; at 48 kHz that is out of reach.
Source: V. Zavalishin, The Art of VA Filter Design, ch. 4, 2012 (from memory): topology-preserving transform with
trapezoidal integrators.
"""

from math import pi, tan

from rtfx.blocks.kind import Parameter
from rtfx.native.options import inlined

HIGHEST = 0.49
