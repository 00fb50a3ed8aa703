"""The noise's generator against the check value that its authors published."""

from rtfx.dsp.random_numbers import following
from tests.blocks.harness import plain


def test_ten_thousandth_number_from_1_is_the_published_one():
    """S. K. Park and K. W. Miller, Comm. ACM 31(10), 1988: 1043618065 (from memory)."""
    number = 1
    for _ in range(10_000):
        number = plain(following)(number)
    assert number == 1_043_618_065
