"""Curves and products against the outside world: closed forms of trigonometry and numpy's polynomials."""

import numpy as np
import pytest
from numpy.polynomial import Chebyshev, Polynomial, chebyshev

from tests.blocks.harness import run

FRAMES = 4800
PHASE = 2 * np.pi * np.arange(FRAMES) / FRAMES


def _lines(x):
    """Amplitude of every line of a spectrum whose tones all fit a whole number of times; line 0 is DC."""
    lines = np.abs(np.fft.rfft(x)) * 2 / len(x)
    lines[0] /= 2
    return lines


def _named(coefficients):
    return {f"c{k}": c for k, c in enumerate(coefficients)}


def _only(lines, expected):
    """Compare a few lines and everything else with 0."""
    whole = np.zeros_like(lines)
    for line, amplitude in expected.items():
        whole[line] = amplitude
    return lines == pytest.approx(whole, abs=1e-13)


def test_polynomial_is_numpys_polynomial():
    rng = np.random.default_rng(0)
    coefficients, x = rng.uniform(-8, 8, 9), rng.uniform(-1, 1, 1000)
    out = run("polynomial", x, **_named(coefficients)).out
    assert np.max(np.abs(out - Polynomial(coefficients)(x))) < 1e-13


@pytest.mark.parametrize("harmonic", range(2, 9))
def test_chebyshev_polynomial_turns_a_full_cosine_into_one_harmonic(harmonic):
    """T_k(cos α) = cos kα, definition of the Chebyshev polynomials; scaled to fit the parameters' range."""
    powers = chebyshev.cheb2poly(Chebyshev.basis(harmonic).coef)
    scale = min(1.0, 8.0 / np.max(np.abs(powers)))
    out = run("polynomial", np.cos(3 * PHASE), **_named(scale * powers)).out
    assert _only(_lines(out), {3 * harmonic: scale})


def test_harmonics_by_prescription():
    """h = (1, 0.1, 0.05, 0.02): M. Le Brun, "Digital waveshaping synthesis", JAES, 1979 (from memory)."""
    out = run("polynomial", np.cos(5 * PHASE), c0=-0.08, c1=0.85, c2=0.04, c3=0.2, c4=0.16).out
    assert _only(_lines(out), {5: 1.0, 10: 0.1, 15: 0.05, 20: 0.02})


def test_second_harmonic_of_a_quadratic_curve():
    """x + a₂x² gives h₂ = a₂A/2 and DC a₂A²/2: double-angle identity."""
    a2, amplitude = 0.2, 0.5
    out = run("polynomial", amplitude * np.cos(5 * PHASE), c2=a2).out
    assert _only(_lines(out), {0: a2 * amplitude**2 / 2, 5: amplitude, 10: a2 * amplitude**2 / 2})


def test_square_of_two_tones_has_six_lines():
    """(a cos α + b cos β)² = (a²+b²)/2 + a²/2 cos 2α + b²/2 cos 2β + ab cos(α+β) + ab cos(α−β)."""
    a, b = 0.5, 0.3
    out = run("square", a * np.cos(40 * PHASE) + b * np.cos(33 * PHASE)).out
    expected = {0: (a * a + b * b) / 2, 80: a * a / 2, 66: b * b / 2, 73: a * b, 7: a * b}
    assert _only(_lines(out), expected)


@pytest.mark.parametrize("depth", [0.1, 0.5, 1.0])
def test_amplitude_modulation_keeps_the_tone_and_adds_two_at_half_the_depth(depth):
    """(1 + m cos β) cos α = cos α + m/2 cos(α+β) + m/2 cos(α−β)."""
    out = run("amplitude-modulate", np.cos(440 * PHASE), np.cos(7 * PHASE), depth=depth).out
    assert _only(_lines(out), {440: 1.0, 433: depth / 2, 447: depth / 2})


def test_at_full_depth_the_side_tones_hold_a_third_of_the_power():
    """m² / (2 + m²), from the three lines (1 + m cos β) cos α has."""
    power = _lines(run("amplitude-modulate", np.cos(440 * PHASE), np.cos(7 * PHASE)).out) ** 2
    assert (power[433] + power[447]) / np.sum(power) == pytest.approx(1 / 3, rel=1e-12)
