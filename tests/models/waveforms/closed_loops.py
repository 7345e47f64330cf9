"""Core loss of a periodic flux by the improved Steinmetz equation with its minor loops split off.

The flux is given by pieces of constant slope. Closed loops are found as in the counting of fatigue cycles:
a swing that is no larger than both its neighbours closes a loop with the like swing of the next one. Every
loop is charged with its own peak-to-peak value (Venkatachalam, Sullivan, Abdallah, Tacca 2002).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Piece = tuple[float, float]  # length, rise
TINY = 1e-12


def split_loss(lengths: Array, slopes: Array, alpha: float, beta: float) -> float:
    """Sum over closed loops of swing^(beta - alpha) times the integral of |slope|^alpha."""
    pieces = [(float(length), float(length * slope)) for length, slope in zip(lengths, slopes, strict=True)]
    swings = _swings([piece for piece in pieces if abs(piece[1]) > TINY])
    total = 0.0
    while len(swings) > 2:
        sizes = [_size(swing) for swing in swings]
        closing = [
            place
            for place in range(1, len(swings) - 1)
            if sizes[place] <= min(sizes[place - 1], sizes[place + 1]) + TINY
        ]
        place = min(closing, key=lambda chosen: sizes[chosen])
        part, rest = _cut(swings[place + 1], sizes[place])
        total += _loss([*swings[place], *part], sizes[place], alpha, beta)
        swings[place - 1 : place + 2] = [[*swings[place - 1], *rest]]
    return total + sum(_loss(swing, _size(swing), alpha, beta) for swing in swings)


def _swings(pieces: list[Piece]) -> list[list[Piece]]:
    """Monotone runs of a closed course, begun at its lowest point."""
    course = np.cumsum([rise for _, rise in pieces])
    first = (int(np.argmin(course)) + 1) % len(pieces)
    swings: list[list[Piece]] = []
    for piece in pieces[first:] + pieces[:first]:
        if swings and swings[-1][0][1] * piece[1] > 0.0:
            swings[-1].append(piece)
        else:
            swings.append([piece])
    return swings


def _size(swing: list[Piece]) -> float:
    return abs(sum(rise for _, rise in swing))


def _cut(swing: list[Piece], size: float) -> tuple[list[Piece], list[Piece]]:
    """Cut a swing where it has covered `size`."""
    part: list[Piece] = []
    rest = list(swing)
    while rest and size > TINY:
        length, rise = rest[0]
        share = min(size / abs(rise), 1.0)
        part.append((length * share, rise * share))
        size -= abs(rise) * share
        rest[0] = (length * (1.0 - share), rise * (1.0 - share))
        if share >= 1.0:
            rest.pop(0)
    return part, rest


def _loss(pieces: list[Piece], swing: float, alpha: float, beta: float) -> float:
    rates = sum(abs(rise / length) ** alpha * length for length, rise in pieces if length > 0.0)
    return swing ** (beta - alpha) * rates
