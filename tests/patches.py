"""Short patches for tests."""

import rtfx

HEAD = 'name = "test"\nabout = "for a test"\n'


def one(kind, *, wires=("x",), **parameters):
    """Return a patch of a single block of *kind*, the guitar on all its *wires*."""
    lines = [f'kind = "{kind}"', *(f'{w} = "input"' for w in wires)]
    lines += [f"{k} = {v!r}".replace("'", '"') for k, v in parameters.items()]
    return rtfx.loads(HEAD + "[blocks.only]\n" + "\n".join(lines) + '\n[output]\nfrom = "only"\n')


def text(body):
    """Return the patch with this *body* below its name."""
    return rtfx.loads(HEAD + body)


RING = """
[blocks.tone]
kind = "oscillator"
pitch = {pitch}
[blocks.product]
kind = "multiply"
x = "input"
y = "tone"
[output]
from = "product"
"""
