"""Parameters that several kinds declare in the same way."""

from rtfx.blocks.kind import Parameter

CUTOFF = Parameter("cutoff", "Hz", 20.0, 20_000.0, 1000.0, "log", "corner or centre frequency")
Q = Parameter("q", "", 0.3, 30.0, 0.7071067811865476, "log", "how narrow: 0.707 is the flattest corner")
