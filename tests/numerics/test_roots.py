import numpy as np

from netsize.numerics.roots import increasing_root


def test_roots_of_many_functions_at_once():
    power = np.array([1.0, 3.0, 7.0, 0.2])
    target = np.array([2.0, 2.0, 100.0, 1.5])
    root = increasing_root(lambda x, p, c: np.sign(x) * np.abs(x) ** p - c, -50, 50, power, target)
    np.testing.assert_allclose(root, target ** (1 / power), rtol=1e-14)


def test_a_bracket_without_a_root_says_on_which_side_it_lies():
    root = increasing_root(lambda x, c: x - c, 0.0, 1.0, np.array([-3.0, 0.5, 3.0, np.nan]))
    np.testing.assert_array_equal(root, [-np.inf, 0.5, np.inf, np.nan])


def test_ends_count_as_roots():
    root = increasing_root(lambda x, c: x - c, 0.0, 1.0, np.array([0.0, 1.0]))
    np.testing.assert_array_equal(root, [0.0, 1.0])


def test_steps_and_flat_stretches_do_not_stall():
    calls = []

    def step(x):
        calls.append(x.size)
        return np.where(x < 1 / 3, -1.0, 1e-30)

    root = increasing_root(step, np.array([-1e6]), np.array([1e6]))
    np.testing.assert_allclose(root, 1 / 3, rtol=1e-12)
    assert len(calls) < 200
