"""Whatever a kind is set to and whatever comes in: numbers stay finite, and silence returns."""

from functools import cache
from itertools import product

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from patches import HEAD, response_file

import rtfx
from rtfx.blocks.table import find, names
from rtfx.compiler.render import Instance

RATE = 48_000
LOUD, TAIL = 2 * RATE, 3 * RATE
LOUDEST = 10 ** (24 / 20)  # +24 dB above full scale
STIMULI = ("silence", "click", "denormal", "step", "sine", "noise", "square")
EXAMPLES = 20


def stimulus(name, level):
    """Return two seconds of a test sound of this level."""
    n = np.arange(LOUD)
    sounds = {
        "silence": np.zeros(LOUD),
        "click": np.eye(1, LOUD, 1000)[0] * level,
        "denormal": np.where(n % 2, 1e-39, -1e-39),
        "step": np.where(n > 1000, level, 0.0),
        "sine": level * np.sin(2 * np.pi * 330 * n / RATE),
        "noise": level * np.clip(np.random.default_rng(1).standard_normal(LOUD) / 4, -1, 1),
        "square": level * np.sign(np.sin(2 * np.pi * 82.4 * n / RATE)),
    }
    return sounds[name].astype(np.float32)


@cache
def plan_of(name, choices):
    """Return a plan of a kind on its own, built for the whole range of each of its parameters."""
    kind = find(name)
    lines = [f'kind = "{name}"', *(f'{p} = "input"' for p in kind.ports), *(f'{c} = "{v}"' for c, v in choices)]
    lines += [f'{f.name} = "{response_file()}"' for f in kind.files]
    controls = [f'"only.{p.name}" = {{ by = "knob" }}' for p in kind.numbers if not p.fixed]
    output = 'left = "only.{}"\nright = "only.{}"' if len(kind.outputs) > 1 else 'from = "only"'
    body = "\n".join([
        "[blocks.only]", *lines, "[output]", output.format(*kind.outputs[:2]), "[controls]", *controls
    ])  # fmt: skip
    return rtfx.plan(rtfx.loads(HEAD + body))


def ways(name):
    """Return every combination of a kind's choices, at most six."""
    kind = find(name)
    combinations = product(*[[(c.name, v) for v in c.choices] for c in kind.choices])
    return tuple(combinations)[:6]


def set_to(instance, places):
    """Set each parameter to a place (0 to 1) in its range, on its own scale."""
    for slot, place in zip(instance.plan.slots, places, strict=True):
        if slot.log:
            value = slot.low * (slot.high / slot.low) ** place
        else:
            value = slot.low + (slot.high - slot.low) * place
        instance.move(slot.target, min(max(value, slot.low), slot.high), glide_s=0.0)


def played(plan, places, sound):
    """Return the output for *sound* and then silence, and the instance as it is afterwards."""
    instance = Instance(plan)
    set_to(instance, places)
    dry = np.concatenate([sound, np.zeros(TAIL, np.float32)])
    out = np.empty((len(dry), 2), np.float32)
    instance.run(dry, out)
    return out.astype(float), instance


PLACES = st.one_of(st.sampled_from([0.0, 1.0]), st.floats(0, 1))


@pytest.mark.parametrize("name", names())
@settings(max_examples=EXAMPLES, deadline=None, derandomize=True)
@given(data=st.data())
def test_numbers_stay_finite_and_silence_returns(name, data):
    plan = plan_of(name, data.draw(st.sampled_from(ways(name) or ((),))))
    places = data.draw(st.lists(PLACES, min_size=len(plan.slots), max_size=len(plan.slots)))
    sound = stimulus(data.draw(st.sampled_from(STIMULI)), LOUDEST * data.draw(st.floats(0.001, 1)))
    out, instance = played(plan, places, sound)
    assert np.isfinite(out).all()
    assert np.isfinite(instance.state).all()
    assert np.isfinite(instance.memory).all()
    idle, _ = played(plan, places, np.zeros_like(sound))
    rest = np.abs(out - idle)
    first, last = rest[LOUD : LOUD + RATE // 2].max(), rest[-RATE // 2 :].max()
    assert last <= max(0.9 * first, 1e-5 * rest.max(), 1e-6)
