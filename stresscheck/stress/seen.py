"""What one branch sees, as sizes: at points exactly, over boxes as upper bounds. Stresses grow with every size."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from stresscheck.arrays import Floats


@dataclass(frozen=True, slots=True)
class BranchSeen:
    """Peak sizes of one branch. Shapes: [lines, points], DC figures [points], signed where they are exact.

    `volt_extremes`, `ampere_extremes`: largest value over time and of the opposite sign, without DC. `root_watt` =
    sqrt(R) I and `root_var` = sqrt(|X|) I: half their squares are the mean and the reactive power.
    """

    volt: Floats
    ampere: Floats
    root_watt: Floats
    root_var: Floats
    dc_volt: Floats
    dc_ampere: Floats
    volt_extremes: tuple[Floats, Floats]
    ampere_extremes: tuple[Floats, Floats]


@dataclass(frozen=True, slots=True)
class PartSeen:
    """One part's branches by role, its value (smallest, largest), and the lines' frequencies.

    `omega`: (smallest, largest) [rad/s], shape [lines, points]; `groups`: line → group of lines that may coincide;
    `sines`: every drive is one; `scale`: capacitance of the whole bank over that of a unit.
    """

    branches: dict[str, BranchSeen]
    value: tuple[Floats, Floats]
    omega: tuple[Floats, Floats]
    groups: tuple[int, ...]
    sines: bool = True
    scale: float = 1.0

    @property
    def main(self) -> BranchSeen:
        return self.branches["main"]


def peak(dc: Floats, extremes: tuple[Floats, Floats]) -> Floats:
    """Largest size of DC and course together: max(|DC + high|, |DC - low|), shape [points].

    extremes: (high, low), largest value and largest of the opposite sign; drives of different frequencies added.
    """
    high, low = extremes
    return np.maximum(np.abs(dc + high), np.abs(dc - low))


def scaled(extremes: tuple[Floats, Floats], factor: float) -> tuple[Floats, Floats]:
    """Both extremes times a factor."""
    return extremes[0] * factor, extremes[1] * factor


def square_mean(dc: Floats, lines: Floats, groups: tuple[int, ...]) -> Floats:
    """DC^2 plus half the square of each line's peak; lines of one group are added before squaring."""
    total = dc * dc
    for group in sorted(set(groups)):
        amplitude = sum_of_group(lines, groups, group)
        total = total + 0.5 * amplitude * amplitude
    return np.asarray(total)


def rms(dc: Floats, lines: Floats, groups: tuple[int, ...]) -> Floats:
    """Root of the mean square, shape [points]."""
    return np.sqrt(square_mean(dc, lines, groups))


def sum_of_group(lines: Floats, groups: tuple[int, ...], group: int) -> Floats:
    """Sum of the peaks of the lines in one group: any phase between them is possible."""
    members = [index for index, number in enumerate(groups) if number == group]
    return np.asarray(lines[members].sum(axis=0))


def heat(seen: BranchSeen, groups: tuple[int, ...]) -> Floats:
    """Mean power in a branch's series resistance, DC included: R I^2/2 at each frequency [W], shape [points]."""
    return seen.dc_ampere * seen.dc_volt + square_mean(np.zeros_like(seen.dc_volt), seen.root_watt, groups)
