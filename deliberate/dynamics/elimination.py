"""Long-run shares by state reduction that never subtracts (GTH).

Grassmann, Taksar and Heyman (1985), Operations Research 33:1107: eliminate the states of a Markov chain one after
the other and take each pivot as the sum of what leaves the state instead of as one minus what stays. All
operations are sums, products and quotients of non-negative numbers, so every entry of the result keeps its
relative accuracy (O'Cinneide 1993, Numerische Mathematik 65:109), also when groups hardly hear each other. An LU
solve of the same system is off by per cents there. Diagonal entries are never looked at.

States are eliminated in panels, so that most of the work is one matrix product per panel. Both functions take
several systems of one size at once, in leading axes.
"""

from __future__ import annotations

import numpy as np

from deliberate.dynamics.network import Floats

PANEL = 32
# A pivot below this may be the remains of underflow; then everything is done again with logarithms.
SAFE_PIVOT = 1e-200


def stationary(rates: Floats) -> Floats:
    """The share vector p with p = p T of one closed group: (..., k), positive, sums to 1.

    rates: (..., k, k) shares of the members among themselves, irreducible; own shares are not needed.
    """
    size = rates.shape[-1]
    if size == 1:
        return np.ones(rates.shape[:-1])
    jumps = rates.copy()
    _clear_diagonal(jumps)
    leaving = jumps.sum(axis=-1)
    jumps /= leaving[..., None]
    pivots = _reduce(jumps, size - 1)
    if pivots.min(initial=1.0) < SAFE_PIVOT:
        if rates.ndim > 2:
            return np.stack([stationary(one) for one in rates])
        return _stationary_by_logarithms(rates)
    visits = np.empty(leaving.shape)
    visits[..., 0] = 1.0
    for state in range(1, size):
        arriving = visits[..., None, :state] @ jumps[..., :state, state, None]
        visits[..., state] = arriving[..., 0, 0] / pivots[..., state - 1]
    # Time spent is visits over the rate of leaving; the smallest rate goes on top so that nothing overflows.
    spent = visits * (leaving.min(axis=-1, keepdims=True) / leaving)
    return spent / spent.sum(axis=-1, keepdims=True)


def absorption(inside: Floats, exits: Floats) -> Floats:
    """Chance of each passing state to end in each exit: (..., u, e), rows sum to 1.

    inside: (..., u, u) shares of those who are in no closed group among themselves (own shares are not needed).
    exits: (..., u, e) their shares on what is never left again; from every state some exit can be reached.
    """
    states, ends = exits.shape[-2:]
    if ends == 1:
        return np.ones(exits.shape)
    if states == 0:
        return np.zeros(exits.shape)
    jumps = np.empty((*exits.shape[:-1], ends + states))
    jumps[..., :ends] = exits
    jumps[..., ends:] = inside
    _clear_diagonal(jumps[..., ends:])
    jumps /= jumps.sum(axis=-1, keepdims=True)
    pivots = _reduce(jumps, states)
    if pivots.min(initial=1.0) < SAFE_PIVOT:
        if inside.ndim > 2:
            return np.stack([absorption(*one) for one in zip(inside, exits, strict=True)])
        return _absorption_by_logarithms(inside, exits)
    chances = jumps[..., :ends]
    width = _panel_width(states)
    for first in range(0, states, width):
        last = min(first + width, states)
        chances[..., first:last, :] += jumps[..., first:last, ends : ends + first] @ chances[..., :first, :]
        for state in range(first + 1, last):
            through = jumps[..., state, None, ends + first : ends + state] @ chances[..., first:state, :]
            chances[..., state, :] += through[..., 0, :]
    return chances / chances.sum(axis=-1, keepdims=True)


def _panel_width(states: int) -> int:
    """How many states are eliminated at a time, at most PANEL: what is quickest, measured from 40 to 1,500 states."""
    return min(max(states // 16, 8), PANEL)


def _clear_diagonal(matrix: Floats) -> None:
    states = np.arange(matrix.shape[-1])
    matrix[..., states, states] = 0.0


def _reduce(jumps: Floats, count: int) -> Floats:
    """Eliminates the last `count` rows and columns in place, the last one first, and returns their pivots.

    Afterwards the row of an eliminated state holds the chances of the next state among those that were left,
    and its column what the others send to it at that moment.
    """
    rows, columns = jumps.shape[-2:]
    pivots = np.empty((*jumps.shape[:-2], count))
    high = count
    while high > 0:
        low = max(high - _panel_width(count), 0)
        top, left = rows - count + low, columns - count + low
        width = high - low
        panel = jumps[..., top : top + width, : left + width]
        if not _reduce_panel(panel, pivots[..., low:high]):
            return np.zeros(count)
        # What the rows above send into the panel, state by state, while the panel is being eliminated.
        sent = jumps[..., :top, left : left + width]
        inner = panel[..., left:]
        for state in range(width - 2, -1, -1):
            sent[..., state] += (sent[..., state + 1 :] @ inner[..., state + 1 :, state, None])[..., 0]
        jumps[..., :top, :left] += sent @ panel[..., :left]
        high = low
    return pivots


def _reduce_panel(panel: Floats, pivots: Floats) -> bool:
    """Eliminates the states of the rows of `panel`, which are its last columns; False when a pivot is too small."""
    width = pivots.shape[-1]
    left = panel.shape[-1] - width
    for state in range(width - 1, -1, -1):
        row = panel[..., state, : left + state]
        pivot = row.sum(axis=-1)
        if pivot.min(initial=1.0) < SAFE_PIVOT:
            return False
        pivots[..., state] = pivot
        row /= pivot[..., None]
        panel[..., :state, : left + state] += panel[..., :state, left + state, None] * row[..., None, :]
    return True


def _log(values: Floats) -> Floats:
    with np.errstate(divide="ignore"):
        return np.log(values)


def _log_reduce(jumps: Floats, count: int) -> Floats:
    """`_reduce` on logarithms: slower, and safe from underflow."""
    rows, columns = jumps.shape
    pivots = np.empty(count)
    for step in range(1, count + 1):
        row = jumps[rows - step, : columns - step]
        pivots[count - step] = pivot = np.logaddexp.reduce(row)
        row -= pivot
        others = jumps[: rows - step]
        others[:, : columns - step] = np.logaddexp(
            others[:, : columns - step], others[:, columns - step, None] + row[None, :]
        )
    return pivots


def _stationary_by_logarithms(rates: Floats) -> Floats:
    jumps = rates.copy()
    np.fill_diagonal(jumps, 0.0)
    jumps = _log(jumps)
    pivots = _log_reduce(jumps, len(rates) - 1)
    spent = np.zeros(len(rates))
    for state in range(1, len(rates)):
        spent[state] = np.logaddexp.reduce(spent[:state] + jumps[:state, state]) - pivots[state - 1]
    shares = np.exp(spent - spent.max())
    return shares / shares.sum()


def _absorption_by_logarithms(inside: Floats, exits: Floats) -> Floats:
    states, ends = exits.shape
    jumps = np.hstack([exits, inside])
    np.fill_diagonal(jumps[:, ends:], 0.0)
    jumps = _log(jumps)
    _log_reduce(jumps, states)
    chances = jumps[:, :ends].copy()
    for state in range(1, states):
        through = jumps[state, ends : ends + state, None] + chances[:state]
        chances[state] = np.logaddexp(chances[state], np.logaddexp.reduce(through, axis=0))
    shares = np.exp(chances)
    return shares / shares.sum(axis=1, keepdims=True)
