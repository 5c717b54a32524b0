"""A course of flux as closed loops that each rise once and fall once: what a core's hysteresis sees."""

from __future__ import annotations

from typing import NamedTuple


class Piece(NamedTuple):
    """Flux that moves evenly from `start` to `end` [T] in `seconds`."""

    seconds: float
    start: float
    end: float


def split_loops(pieces: list[Piece]) -> list[list[Piece]]:
    """The loops of one period, each closed, rising once and falling once; together they are all pieces.

    `pieces` follow on each other and close. The first loop reaches from the lowest to the highest flux; where the flux
    turns back on its way, what happens until it is back at that flux is a loop of its own, split in the same way.
    Source: separation of minor loops of the improved generalised Steinmetz equation.
    """
    waiting, loops = [pieces], []
    while waiting:
        period = waiting.pop()
        lowest = min(range(len(period)), key=lambda i: period[i].start)
        turned = period[lowest:] + period[:lowest]
        highest = max(range(len(turned)), key=lambda i: turned[i].start)
        rise, in_rise = _one_way(turned[:highest], 1.0)
        fall, in_fall = _one_way(turned[highest:], -1.0)
        loops.append(rise + fall)
        waiting += in_rise + in_fall
    return loops


def _one_way(pieces: list[Piece], sign: float) -> tuple[list[Piece], list[list[Piece]]]:
    """What moves along `sign` beyond all before, and the loops on the way; the last end is the furthest of all."""
    along: list[Piece] = []
    inside: list[Piece] = []
    loops: list[list[Piece]] = []
    level = 0.0
    for piece in pieces:
        if not inside:
            if sign * (piece.end - piece.start) >= 0.0:
                along.append(piece)
                continue
            level = piece.start
        if sign * (piece.end - level) < 0.0:
            inside.append(piece)
            continue
        share = (level - piece.start) / (piece.end - piece.start)
        inside.append(Piece(share * piece.seconds, piece.start, level))
        loops.append(inside)
        inside = []
        if share < 1.0:
            along.append(Piece((1.0 - share) * piece.seconds, level, piece.end))
    return along, loops
