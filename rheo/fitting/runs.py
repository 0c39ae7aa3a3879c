"""Runs test: whether the signs of residuals look like chance.

A. Wald & J. Wolfowitz, Ann. Math. Stat. 11 (1940) 147. The distribution is exact.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray


def runs_test(residuals: ArrayLike) -> tuple[int, float]:
    """Count the runs of equal sign and the chance of so few.

    Parameters
    ----------
    residuals : array_like, shape (n,)
        In the order of the setting; zeros are left out.

    Returns
    -------
    runs : int
        Number of runs.
    probability : float
        Chance of this many runs or fewer among random orders of the same signs [-]; 1 when all
        signs are equal, where the test says nothing.
    """
    signs = np.sign(np.asarray(residuals, dtype=float))
    signs = signs[signs != 0]
    if signs.size == 0:
        return 0, 1.0
    runs = 1 + int(np.count_nonzero(np.diff(signs)))
    above = int(np.count_nonzero(signs > 0))
    below = signs.size - above
    if above == 0 or below == 0:
        return runs, 1.0
    return runs, float(min(1.0, run_probabilities(above, below)[: runs + 1].sum()))


def run_probabilities(above: int, below: int) -> NDArray[np.float64]:
    """Return the chance of 0, 1, 2, ... runs for numbers of two signs, both above 0.

    An even number 2k of runs: 2 C(a-1, k-1) C(b-1, k-1)/C(a+b, a); an odd number 2k + 1:
    [C(a-1, k) C(b-1, k-1) + C(a-1, k-1) C(b-1, k)]/C(a+b, a).
    """
    from scipy.special import gammaln

    def log_choose(total: int, part: NDArray[np.intp]) -> NDArray[np.float64]:
        inside = (part >= 0) & (part <= total)
        kept = np.where(inside, part, 0)
        value = gammaln(total + 1) - gammaln(kept + 1) - gammaln(total - kept + 1)
        return np.where(inside, value, -np.inf)

    runs = np.arange(above + below + 1)
    half = runs // 2
    all_orders = log_choose(above + below, np.asarray(above))
    first, second = above - 1, below - 1
    lower_first = log_choose(first, half - 1)
    lower_second = log_choose(second, half - 1)
    even = 2.0 * np.exp(lower_first + lower_second - all_orders)
    odd = np.exp(log_choose(first, half) + lower_second - all_orders) + np.exp(
        lower_first + log_choose(second, half) - all_orders
    )
    return np.where(runs < 2, 0.0, np.where(runs % 2 == 0, even, odd))
