"""The border of a network's linear system: one row for each supply, and one for a temperature that is held while λ is sought."""

from __future__ import annotations

import numpy as np

from ingle.network_state import Border, Control, State
from ingle.network_sweep import Network, Sweep
from ingle.ports import PortModel
from ingle.shapes import Array


def border_rows(
    network: Network, border: Border, control: Control | None, state: State, multiples: list[Array], models: list[PortModel],
    swept: Sweep, owners: list[int | None],
) -> tuple[list[list[Array]], list[Array]]:  # fmt: skip
    """M and what is short: Σ M δμ = short, a row for each supply and one for the held temperature."""
    count, groups = border.count, len(border.given)
    zero = np.zeros_like(network.zero)
    M: list[list[Array]] = []
    short: list[Array] = []
    for g in range(groups):
        F, move, change = zero, zero, [zero] * count
        for e, element in enumerate(network.elements):
            source, model, owner = element.port.source, models[e], owners[e]
            if source.group != g or source.weight is None or model.F is None or model.Fa is None or model.Fb is None:
                continue
            w = source.weight
            F = F + w * model.F
            move = move + w * (model.Fa * swept.a[e][0] + model.Fb * swept.b[e][0])
            for j in range(count):
                change[j] = change[j] + w * (model.Fa * swept.a[e][j + 1] + model.Fb * swept.b[e][j + 1])
            if owner is not None and model.Fl is not None:
                change[owner] = change[owner] + w * model.Fl
        per = (border.given[g] / F) ** 2
        sought = border.control is not None and border.driven[g]
        scale = state.mu[groups] if sought else (border.scale if border.driven[g] else 1.0)
        aim = scale * per
        row = [2.0 * aim / F * x for x in change]
        row[g] = row[g] + 1.0
        if sought:
            row[groups] = row[groups] - per
        M.append(row)
        short.append(aim - state.mu[g] - 2.0 * aim / F * move)
    if control is not None and border.target is not None:
        hold = control(network, state, multiples, models)
        T, row = hold.T, [zero] * count
        for e, owner in enumerate(owners):
            for derivative, columns in ((hold.a[e], swept.a[e]), (hold.b[e], swept.b[e])):
                if derivative is not None:
                    T = T + derivative * columns[0]
                    row = [x + derivative * column for x, column in zip(row, columns[1:], strict=True)]
            slope = hold.l[e]
            if owner is not None and slope is not None:
                row[owner] = row[owner] + slope
        M.append(row)
        short.append(border.target - T)
    return M, short


def small_solve(M: list[list[Array]], short: list[Array]) -> list[Array]:
    """The solution of every case's few equations, NaN where they are singular."""
    if len(M) == 1:
        return [short[0] / M[0][0]]
    if len(M) == 2:
        (a, b), (c, d) = M
        det = a * d - b * c
        return [(d * short[0] - b * short[1]) / det, (a * short[1] - c * short[0]) / det]
    matrix = np.stack([np.stack(row, axis=-1) for row in M], axis=-2)
    right = np.stack(short, axis=-1)[..., None]
    usable = np.isfinite(matrix).all(axis=(1, 2)) & (np.abs(np.linalg.det(np.nan_to_num(matrix))) > 0.0)
    safe = np.where(usable[:, None, None], matrix, np.eye(len(M)))
    solved = np.where(usable[:, None, None], np.linalg.solve(safe, right), np.nan)
    return [solved[:, j, 0] for j in range(len(M))]


def _determinant(M: list[list[Array]], size: int) -> Array | float:
    if size == 0:
        return 1.0
    if size == 1:
        return M[0][0]
    if size == 2:
        return M[0][0] * M[1][1] - M[0][1] * M[1][0]
    matrix = np.stack([np.stack(row[:size], axis=-1) for row in M[:size]], axis=-2)
    return np.asarray(np.linalg.det(np.nan_to_num(matrix)))


def judge(
    M: list[list[Array]], negatives: np.ndarray | None, groups: int, sought: bool
) -> tuple[np.ndarray | None, Array | None]:  # fmt: skip
    """Where the state is unstable at its fixed inputs (None for nowhere), and dλ/dT where λ is sought.

    A supply that is fixed can make one otherwise unstable mode stable (and the reverse): the sign of its border counts.
    """
    inner = _determinant(M, groups)
    if negatives is None:
        stable = np.asarray(inner > 0.0)
    else:
        stable = (negatives <= groups) & (np.where(negatives % 2 == 0, inner, -inner) > 0.0)
    if not sought:
        return (None if np.count_nonzero(stable) == stable.size else ~stable), None
    slope = inner / _determinant(M, groups + 1)
    # While a temperature is held nothing runs away; an unstable state is told by a falling scale.
    return None, np.where(stable, slope, -np.abs(slope))
