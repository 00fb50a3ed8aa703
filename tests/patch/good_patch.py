"""A patch with everything in it that a patch can have; tests break it."""

GOOD = '''\
name = "Good"
about = """
All is [well], isn't it? # """
tempo = 100
reference = 440

[blocks.tone]  # "not a key" = {
kind = "oscillator"
wave = "sine"
pitch = { base = "E4 -14c", add = "wobble", depth = "30 c" }

[blocks.wobble]
kind = "oscillator"
pitch = "5 Hz"

[blocks.sum]
kind = "add"
x = "input"
y = "late"

[blocks.product]
kind = "multiply"
x = "sum"
y = "tone"

[blocks.late]
kind = "delay"
x = "product"
time = "330 ms"

[blocks."soft"]
"kind" = 'mix'
dry = "input"
'wet' = "product"
amount = "50 %"

[blocks.place]
kind = "pan"
x = "soft"

[blocks.safe]
kind = "limiter"
x = "place.left"
ceiling = "-1 dB"

[output]
left = "safe"
right = "place.right"

[controls]
"tone.pitch" = { by = "knob 1", from = "A3", to = "A5", ladder = [
    "A3",  # the root
    "E4", "A4",
] }
"safe.ceiling" = { by = "pedal", from = -10, to = -0.5, ladder = [-10, -6] }
'''
