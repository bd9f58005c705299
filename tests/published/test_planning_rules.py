"""Planning from a lower limit, and from two-sided 60 % intervals in particular.

Idea: Perugini, Gallucci & Costantini (2014), Perspectives on Psychological Science 9, 319. Their
table was not available: expected limits are an independent recomputation from the noncentral t.
"""

import pytest

import netsize


@pytest.mark.parametrize(
    ("n", "d", "limit", "size"),
    [(20, 0.8, 0.5177, 60), (50, 0.5, 0.3277, 148), (100, 0.3, 0.1799, 486)],
)
def test_lower_limit_of_one_study(n, d, limit, size):
    t = d * (n / 2) ** 0.5
    plan = netsize.plan(f"t({2 * n - 2}) = {t:.10f}", rule="pooled-limit")
    assert plan.answer.value == pytest.approx(limit, abs=6e-5)
    assert plan.answer.sized.n_per_group == (size, size)


# Independent recomputation of Taylor & Muller (1996) / Anderson, Kelley & Maxwell (2017):
# n a group, t, assurance, δ and n for 80 % power, published only if p < .05.
@pytest.mark.parametrize(
    ("n", "t", "assurance", "delta", "size"),
    [
        (20, 2.5, 0.5, 0.3714, 115),
        (20, 3.0, 0.8, 0.3494, 130),
        (30, 2.8, 0.5, 0.5784, 48),
        (50, 3.5, 0.8, 0.4616, 75),
        (50, 3.5, 0.95, 0.2116, 352),
        (15, 4.0, 0.8, 1.0279, 16),
    ],
)
def test_bound_of_one_significant_study(n, t, assurance, delta, size):
    plan = netsize.plan(f"t({2 * n - 2}) = {t}", rule="single-study", assurance=assurance)
    assert plan.answer.value == pytest.approx(delta, abs=3e-4)
    # the distribution of bounds is held on a grid, so a long n may differ by a step of it
    assert plan.answer.sized.n_per_group[0] == pytest.approx(size, abs=max(0, size // 300))


def test_a_barely_significant_study_leaves_no_finite_size():
    plan = netsize.plan("t(38) = 2.1", rule="single-study", assurance=0.5)
    assert not plan.answer.finite
