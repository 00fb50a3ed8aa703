"""Layout of the callback's own words: addresses and running state, private to the sound process.

Written by: the control thread before the stream starts, and NEXT by it later (release); the rest by the audio
thread alone.  A graph record is GRAPH_WORDS words: the kernel and its three arrays, and what it is.
"""

SHARED = 0  # address of the shared block
SCRATCH_A, SCRATCH_B, MONO = 1, 2, 3  # addresses: CHUNK stereo doubles twice, CHUNK floats
NOW, NEXT, OLD = (
    4,
    5,
    6,
)  # addresses of graph records: heard, waiting to be faded in (0: none), faded out and free
CLOCK = 8  # two words for the clock
FADE_LEFT = 10
PANIC_SEEN = 12
GAIN, WET, LIMIT, HOLD_LEFT, HOLD_RIGHT = 16, 17, 18, 19, 20  # doubles
IN_CHANNELS, OUT_CHANNELS = 24, 25
DEAD = 26  # 1: the graph is not run until a fresh one comes
METERS = 32  # doubles: three peaks, then three mean squares
SIZE = 40

KERNEL, PARAMETERS, STATE, MEMORY, NUMBER, COUNT, FIRST_LOG, SHOWN, SHOWN_COUNT = range(9)
GRAPH_WORDS = 9

CHUNK = 256
"""Most frames a graph is given at a time; longer callbacks go in several chunks."""
