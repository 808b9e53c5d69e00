import numpy as np
import pytest

from deliberate.dynamics.explained import NOTHING, Association


def associated(numbers, outcome, parts=3):
    """What `numbers` (k, d) explain of `outcome` (d,), given in several parts."""
    sums = Association(numbers[:, 0], outcome[:1])
    for part in np.array_split(np.arange(len(outcome)), parts):
        sums.add(numbers[:, part], outcome[None, part])
    return sums.explained(0)


def test_shares_of_a_sum_of_independent_guesses():
    """Var(a X) / Var(a X + b Y + c Z) for independent X, Y, Z of the same variance."""
    draw = np.random.default_rng(1)
    guesses, weights = draw.uniform(-1, 1, (3, 20_000)), np.array([3.0, 2.0, 1.0])
    outcome = 1e6 + weights @ guesses
    for at, weight in enumerate(weights):
        found = associated(guesses[[at]], outcome)
        assert abs(found.share - weight**2 / 14) < 4 * found.error
        assert found.chance < 1e-12


def test_several_numbers_are_taken_together():
    draw = np.random.default_rng(2)
    row = draw.dirichlet([2, 3, 5], 5_000).T
    known = associated(row, np.array([1.0, -4.0, 2.0]) @ row)
    assert known.share == pytest.approx(1, abs=1e-6)
    noise = draw.normal(size=5_000)
    half = associated(row, (row[0] - row[0].mean()) / row[0].std() + noise / noise.std())
    assert half.share == pytest.approx(0.5, abs=4 * half.error)


def test_the_fit_by_numpy():
    """The same as the residuals of numpy's own least squares, adjusted."""
    draw = np.random.default_rng(3)
    numbers = draw.normal(size=(4, 200))
    outcome = numbers[0] ** 2 + numbers[1] + draw.normal(size=200)
    design = np.vstack([np.ones(200), numbers]).T
    _, (left,), _, _ = np.linalg.lstsq(design, outcome, rcond=None)
    share = 1 - left / ((outcome - outcome.mean()) ** 2).sum() * 199 / 195
    assert associated(numbers, outcome).share == pytest.approx(share, rel=1e-8)


def test_noise_explains_nothing_on_average_and_seldom_much_by_chance():
    draw = np.random.default_rng(4)
    found = [associated(draw.normal(size=(5, 300)), draw.normal(size=300)) for _ in range(300)]
    assert np.mean([one.share for one in found]) == pytest.approx(0, abs=0.005)
    assert np.mean([one.chance < 0.1 for one in found]) == pytest.approx(0.1, abs=0.05)


def test_the_error_is_that_of_repeating_it():
    draw = np.random.default_rng(5)
    found = []
    for _ in range(300):
        guess = draw.normal(size=(1, 400))
        found.append(associated(guess, guess[0] + draw.normal(size=400)))
    assert np.std([one.share for one in found]) == pytest.approx(found[0].error, rel=0.2)


@pytest.mark.parametrize("draws", [1, 2, 4])
def test_too_few_draws_say_nothing(draws):
    draw = np.random.default_rng(6)
    assert associated(draw.normal(size=(4, draws)), draw.normal(size=draws)) == NOTHING


def test_what_does_not_vary_explains_nothing_and_cannot_be_explained():
    draw = np.random.default_rng(7)
    varied, fixed = draw.normal(size=(1, 100)), np.full((1, 100), 0.3)
    assert associated(fixed, varied[0]) == NOTHING
    assert associated(varied, 1e9 + fixed[0]) == NOTHING
