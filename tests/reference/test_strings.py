"""The plucked string against the closed forms of its papers, measured on the sound alone.

Sources: K. Karplus and A. Strong, "Digital Synthesis of Plucked-String and Drum Timbres"; D. A. Jaffe and
J. O. Smith, "Extensions of the Karplus-Strong Plucked-String Algorithm"; both in Computer Music Journal 7(2),
1983 (from memory).
"""

from dataclasses import replace

import numpy as np
import pytest

from rtfx.devices import strings

RATE = 48_000


def _pluck(string, seconds, rate=RATE, position=0.13, pickup=0.19):
    x = strings.burst(round(seconds * rate), string.delay, 1, (0.0,), position, pickup)
    return strings.ring(string, x)


def _line(y, frequency_hz, periods, period, rate=RATE):
    """Return the complex amplitude of *y* around *frequency_hz* at every frame, under a Hann window."""
    from scipy.signal import fftconvolve, get_window

    window = get_window("hann", round(periods * period))
    turned = y * np.exp(-2j * np.pi * frequency_hz / rate * np.arange(len(y)))
    return fftconvolve(turned, window / window.sum(), "valid")


def _cents_off(y, pitch_hz, rate=RATE):
    """Return how far the fundamental is from *pitch_hz*: the slope of its phase over time."""
    phase = np.unwrap(np.angle(_line(y, pitch_hz, 16, rate / pitch_hz, rate)))
    slope = np.polyfit(np.arange(len(phase)), phase, 1)[0]
    return 1200 * np.log2(1 + slope * rate / (2 * np.pi * pitch_hz))


def _t60_s(y, frequency_hz, periods, period, rate=RATE):
    """Return the decay time of the partial at *frequency_hz*: the slope of its level over time."""
    level_db = 20 * np.log10(np.abs(_line(y, frequency_hz, periods, period, rate)))
    return -60 / (np.polyfit(np.arange(len(level_db)), level_db, 1)[0] * rate)


@pytest.mark.parametrize("rate", [44_100, 48_000, 96_000])
@pytest.mark.parametrize("pitch_hz", [82.40689, 110.0, 329.6276, 1318.5102])
def test_string_is_in_tune_within_half_a_cent(pitch_hz, rate):
    # Tuning allpass: Jaffe & Smith 1983. E2, A2, E4, E6 with A4 = 440 Hz (ISO 16; from memory).
    y = _pluck(strings.loop(pitch_hz, 1.0, rate), 1.5, rate)
    assert abs(_cents_off(y[rate // 10 :], pitch_hz, rate)) < 0.5


def test_thick_string_is_in_tune_too():
    # M averages delay by M/2 samples at every frequency (linear phase): common practice.
    y = _pluck(strings.loop(82.40689, 5.0, RATE, averages=4), 1.5)
    assert abs(_cents_off(y[4800:], 82.40689)) < 0.5


@pytest.mark.parametrize(
    ("pitch_hz", "delay", "allpass"),
    [(82.40689, 581, 0.01237), (329.6276, 145, 0.78754), (1318.5102, 35, 0.05025)],
)
def test_loop_is_split_as_the_paper_splits_it(pitch_hz, delay, allpass):
    # Jaffe & Smith 1983: N = floor(P - S - 0.1), C = sin((1-D)w/2)/sin((1+D)w/2); 48 kHz, S = 1/2, by hand.
    string = strings.loop(pitch_hz, 1.0, RATE)
    assert (string.delay, string.allpass) == (delay, pytest.approx(allpass, abs=1e-5))


@pytest.mark.parametrize(
    ("pitch_hz", "partial", "t60_s"),
    [
        (110.0, 1, 2423.0),
        (110.0, 5, 96.90),
        (110.0, 10, 24.21),
        (329.6276, 1, 90.0),
        (329.6276, 10, 0.893),
        (1318.5102, 1, 1.405),
    ],
)
def test_partial_of_the_lossless_loop_dies_as_the_average_says(pitch_hz, partial, t60_s):
    # Karplus & Strong 1983: one average a turn, t60(f) = -ln 1000/(f0 ln cos(pi f/fs)); at 48 kHz, by hand.
    string = replace(strings.loop(pitch_hz, 1.0, RATE), gain=1.0)
    y = _pluck(string, 1.2)[2400:]
    assert _t60_s(y, partial * pitch_hz, 32, RATE / pitch_hz) == pytest.approx(t60_s, rel=2e-3)


def test_high_partial_of_a_high_string_dies_at_once():
    # The same closed form: fifth partial of E6, 0.055 s (stated to the millisecond).
    string = replace(strings.loop(1318.5102, 1.0, RATE), gain=1.0)
    y = _pluck(string, 0.06)[240:]
    assert _t60_s(y, 5 * 1318.5102, 12, RATE / 1318.5102) == pytest.approx(0.055, abs=1e-3)


@pytest.mark.parametrize(("pitch_hz", "t60_s"), [(82.40689, 6.0), (110.0, 3.0), (329.6276, 2.0), (1318.5102, 1.0)])
def test_fundamental_dies_in_the_time_asked_for(pitch_hz, t60_s):
    # Jaffe & Smith 1983: rho = 10^(-3/(f0 t60))/cos(w0/2).
    y = _pluck(strings.loop(pitch_hz, t60_s, RATE), 1.2)[2400:]
    assert _t60_s(y, pitch_hz, 32, RATE / pitch_hz) == pytest.approx(t60_s, rel=2e-3)


def test_each_average_takes_its_share_of_a_high_partial():
    # Karplus & Strong 1983, M times: a turn takes ln rho + M ln cos(pi f/fs); rho from t60 = 5 s at 110 Hz.
    f0, partial, averages, asked_s = 110.0, 12, 3, 5.0
    a_turn = -np.log(1000) / (f0 * asked_s)
    a_turn += averages * (np.log(np.cos(np.pi * partial * f0 / RATE)) - np.log(np.cos(np.pi * f0 / RATE)))
    y = _pluck(strings.loop(f0, asked_s, RATE, averages), 1.2)[2400:]
    assert _t60_s(y, partial * f0, 32, RATE / f0) == pytest.approx(-np.log(1000) / (f0 * a_turn), rel=2e-3)


def test_plucked_at_a_fifth_the_string_lacks_its_fifth_partial():
    # Jaffe & Smith 1983, the pick-position comb: a partial with a node under the pick is not excited.
    y = _pluck(strings.loop(82.40689, 5.0, RATE), 1.0, position=0.2, pickup=0.5 / 5.5)[4800:]
    fourth, fifth, sixth = (np.abs(_line(y, k * 82.40689, 16, RATE / 82.40689)[0]) for k in (4, 5, 6))
    assert 20 * np.log10(min(fourth, sixth) / fifth) > 20


def test_heard_at_half_its_length_the_string_lacks_its_octave():
    # The same comb at the pickup: common practice.
    y = _pluck(strings.loop(82.40689, 5.0, RATE), 1.0, pickup=0.5)[4800:]
    first, second, third = (np.abs(_line(y, k * 82.40689, 16, RATE / 82.40689)[0]) for k in (1, 2, 3))
    assert 20 * np.log10(min(first, third) / second) > 20


def test_bent_string_sounds_as_many_cents_higher():
    # Equal temperament: 200 cents above D4 (293.6648 Hz) is E4 (329.6276 Hz).
    y = _pluck(strings.loop(293.6648, 3.0, RATE), 1.5)
    bent = strings.bend(y, np.full(RATE, 200.0))
    assert abs(_cents_off(bent[4800:], 329.6276)) < 0.5


@pytest.mark.parametrize("q", [1.0, 1.8, 3.0])
def test_pickup_rises_by_its_q_at_its_resonance(q):
    # Second-order low-pass w^2/(s^2 + s w/q + w^2): its gain at w is q (common practice).
    t = np.arange(RATE) / RATE
    heard = strings.pickup(np.sin(2 * np.pi * 3000 * t), 3000.0, q, RATE)[RATE // 2 :]
    assert np.sqrt(2 * np.mean(heard**2)) == pytest.approx(q, rel=1e-6)


def test_burst_leaves_no_offset_to_go_round():
    x = strings.burst(20_000, 434, 5, (0.9, 0.5), 0.13, 0.19)
    assert abs(x.sum()) < 1e-9


def test_another_seed_is_another_burst():
    first, second = (strings.burst(1000, 400, seed, (0.5,), 0.13, 0.19) for seed in (1, 2))
    assert not np.array_equal(first, second)


def test_decay_longer_than_the_averages_allow_is_refused():
    # At 1318.5 Hz one average alone ends the note in 1.405 s (closed form above).
    with pytest.raises(ValueError, match=r"t60 = 2\.0 s is above .* at 1318\.5102 Hz: 1\.41 s"):
        strings.loop(1318.5102, 2.0, RATE)


def test_pitch_with_no_room_for_the_loop_is_refused():
    with pytest.raises(ValueError, match=r"pitch = 20000\.0 Hz is too high for a string at 48000 Hz"):
        strings.loop(20_000.0, 1.0, RATE)
