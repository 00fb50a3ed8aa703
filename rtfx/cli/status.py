"""What there is to see while playing, as plain facts."""

from __future__ import annotations

from math import log10

import numpy as np

from rtfx.devices.front import Front
from rtfx.pitch.notes import nearest

FLOOR_DB = -99.0


def decibels(amplitude: float) -> float:
    """Return *amplitude* in dB re full scale, not below `FLOOR_DB`."""
    return max(FLOOR_DB, 20 * log10(amplitude)) if amplitude > 0 else FLOOR_DB


def load_percentile(histogram: np.ndarray, share: float) -> float:
    """Return the load (percent of the time there is) that *share* of the callbacks stay within."""
    total = histogram.sum()
    if not total:
        return 0.0
    return 2.0 * (int(np.searchsorted(np.cumsum(histogram), share * total)) + 1)


def carriers(front: Front) -> list[dict]:
    """Return the oscillators of the patch: block, frequency, nearest note and cents."""
    if front.plan is None:
        return []
    values, patch = front.shared.many("VALUES"), front.plan.patch
    found = []
    for slot in front.plan.slots:
        block, parameter = slot.target.rsplit(".", 1)
        hz = float(values[slot.index])
        if patch.block(block).kind.name == "oscillator" and parameter == "pitch" and hz >= 20:
            note, cents = nearest(hz, patch.reference)
            found.append({"block": block, "hz": round(hz, 3), "note": note, "cents": round(cents, 1) + 0.0})
    return found


def status(front: Front) -> dict:
    """Return the present state of *front*, ready for JSON."""
    shared = front.shared
    peaks, squares = shared.many("PEAK").tolist(), shared.many("SQUARE").tolist()
    load = shared.many("LOAD").copy()
    delay = front.plan.delay if front.plan else 0
    return {
        "state": front.state,
        "patch": front.plan.patch.name if front.plan else "",
        "device": front.device,
        "muted": bool(shared.get("MUTE")),
        "bypass": bool(shared.get("BYPASS")),
        "gain": round(shared.get("GAIN"), 4),
        "seconds": round(shared.get("FRAMES") / front.wish.rate, 3),
        "peak_db": [round(decibels(p), 1) for p in peaks],
        "rms_db": [round(decibels(max(s, 0.0) ** 0.5), 1) for s in squares],
        "ceiling_db": round(decibels(shared.get("LIMIT_GAIN")), 1),
        "load": {"p50": load_percentile(load, 0.5), "p99": load_percentile(load, 0.99)},
        "blocks": int(shared.get("BLOCKS")),
        "late_blocks": int(shared.get("LATE_BLOCKS")),
        "longest_us": round(shared.get("LONGEST_NS") / 1000, 1),
        "frames_a_block": int(shared.get("LAST_FRAMES")),
        "xruns": int(shared.get("XRUNS")),
        "resets": int(shared.get("RESETS")),
        "restarts": int(shared.get("RESTARTS")),
        "dropped_events": int(shared.get("DROPPED_EVENTS")),
        "dropped_frames": int(shared.get("DROPPED_FRAMES")),
        "events_high": int(shared.get("EVENTS_HIGH")),
        "graph": int(shared.get("GRAPH")),
        "delay": delay,
        "delay_ms": round(1000 * delay / front.wish.rate, 2),
        "carriers": carriers(front),
        "recording": bool(shared.get("AUDIO_ON")),
    }
