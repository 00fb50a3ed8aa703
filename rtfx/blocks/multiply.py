"""Four-quadrant multiplication: partials f of x and g of y give f+g and f−g, and neither f nor g.

    z = x · y

State: none.  Delay: none.
Source: product-to-sum identity, cos a · cos b = ½ cos(a−b) + ½ cos(a+b).
"""

from rtfx.blocks.kind import Code, kind, product
from rtfx.native.options import inlined


@inlined
def tick(x, y):
    return x * y


@kind(
    "multiply",
    about="The clean product of two signals: sums and differences of their frequencies, and neither of the two.",
    ports=("x", "y"),
    law="z = x · y",
    source="Product-to-sum identity: cos a · cos b = ½ cos(a−b) + ½ cos(a+b).",
    bandwidth=product,
    linear=False,
)
def multiply(setting):
    return Code(tick=tick)
