"""The callback as a device would call it, without a device."""

import ctypes

import numpy as np

from rtfx.devices.artifact import load, save
from rtfx.engine.host import Host
from rtfx.engine.layout import OFFSET, Shared

RATE = 48_000


def graph(plan, number):
    linear = sum(not s.log for s in plan.slots)
    return load(save(plan), number, [s.value for s in plan.slots], linear)


class Stand:
    """A host with a shared block of its own, and the device's side of it."""

    def __init__(self, plan, ceiling=0.99):
        self.shared = Shared(bytearray(8 * OFFSET["SIZE"]))
        self.shared.set("RATE", RATE)
        self.shared.set("CEILING", ceiling)
        self.shared.set("FADE_FRAMES", 1000)
        self.host = Host(self.shared, graph(plan, 1), 1, 2)
        pointer = ctypes.c_void_p
        kind = ctypes.CFUNCTYPE(ctypes.c_int, pointer, pointer, ctypes.c_ulong, pointer, ctypes.c_ulong, pointer)
        self.call = kind(self.host.callback.address)

    def run(self, samples, block=64):
        samples = np.ascontiguousarray(samples, np.float32)
        out = np.zeros((len(samples), 2), np.float32)
        for at in range(0, len(samples), block):
            count = min(block, len(samples) - at)
            self.call(samples[at:].ctypes.data, out[at:].ctypes.data, count, None, 0, self.host.userdata)
            self.host.tend()
        return out
