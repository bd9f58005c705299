"""Speed of the reader; run with `pytest tests/bench --benchmark-enable`. No time is asserted."""

import contextlib
import tracemalloc

import pytest

from netsize.errors import ReadingError
from netsize.reported import read

PLAIN = "".join(f"t({20 + i % 80}) = {2 + i % 30 / 10:.2f}\n" for i in range(100_000))
RICH = "".join(
    f"Study {i}: t({20 + i % 80}) = {2 + i % 30 / 10:.2f}, p = .0{i % 9 + 1}6 [n {20 + i % 9}]\n"
    for i in range(100_000)
)


@pytest.mark.parametrize("text", [PLAIN, RICH], ids=["plain", "labelled, with p and setting"])
def test_hundred_thousand_lines(benchmark, text):
    reading = benchmark.pedantic(read, (text,), rounds=1)
    assert len(reading.results) == 100_000


@pytest.mark.parametrize("size", [250_000, 1_000_000])
@pytest.mark.parametrize(
    "unit",
    ["t(((((", "1234567890", "t(38", "F(1,", "p = ", "[n ", "t ", "\n,", "12/40 vs ", "95% CI ",
     '"a",', "χ²(", "a", "M = 5 ", "&lt;", "½", "r = .3 ± ", "a:", "|", ";\n", "#", "n = 20, ",
     "t,df\n", "\u0301", "(", "12%", "1,", "{[("],
)  # fmt: skip
def test_junk_at_two_lengths(benchmark, unit, size):
    """Four times the text should take four times as long; quadratic work takes sixteen."""
    text = unit * (size // len(unit))

    def attempt():
        with contextlib.suppress(ReadingError):
            read(text)

    benchmark.pedantic(attempt, rounds=1)


def test_memory_is_linear():
    def peak(lines):
        text = "\n".join(RICH.split("\n", lines)[:lines])
        tracemalloc.start()
        reading = read(text)
        top = tracemalloc.get_traced_memory()[1]
        tracemalloc.stop()
        assert len(reading.results) == lines
        return top

    assert peak(4000) < 3 * peak(2000)
