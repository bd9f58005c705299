"""Recomputed p of critical values printed in the tables at the back of statistics handbooks.

Two-tailed .05 and .01 points of t, upper .05 and .01 points of F and chi-square, .05 points of
r, as in Fisher and Yates (1963), Statistical Tables, tables III, IV, V and VII; from memory, two
or three decimals.
"""

import pytest

from netsize.reported import read
from netsize.reported.implied import p_range


@pytest.mark.parametrize(
    ("printed", "p"),
    [
        ("t(10) = 2.228", 0.05),
        ("t(30) = 2.042", 0.05),
        ("t(60) = 2.000", 0.05),
        ("t(30) = 2.750", 0.01),
        ("t(120) = 1.658 [one-tailed]", 0.05),
        ("F(1, 60) = 4.00", 0.05),
        ("F(2, 60) = 3.15", 0.05),
        ("F(1, 40) = 7.31", 0.01),
        ("χ²(1, N = 80) = 3.841", 0.05),
        ("χ²(2, N = 80) = 5.991", 0.05),
        ("χ²(1, N = 80) = 6.635", 0.01),
        ("z = 1.960, n = 80", 0.05),
        ("z = 2.576, n = 80", 0.01),
        ("r(50) = .273", 0.05),
        ("r(100) = .195", 0.05),
    ],
)
def test_rounding_of_the_printed_value_spans_its_level(printed, p):
    (result,) = read(printed).results
    low, high = p_range(result)
    assert low <= p <= high
