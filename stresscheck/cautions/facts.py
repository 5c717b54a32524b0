"""What the cautions look at: the worst of the box at each node and capacitor, state by state."""

from __future__ import annotations

import math
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class NodeFact:
    """A node in one state, worst over its box; sizes, not negative. `gain` = node peak over drive peak.

    `volt_rms` is the AC part, `volt_dc` the direct part, `volt_peak` the size of both together; `hertz` is
    where the worst occurs. `drive_volt_peak`, `gain` None where the drive is a current, `resonance_hertz`
    None where no resonance lies in or near the band. A figure that couldn't be computed is NaN: it raises a
    caution of its own.
    """

    node: str
    state: str
    volt_rms: float
    volt_peak: float
    volt_dc: float
    hertz: float
    drive: str
    drive_volt_peak: float | None
    gain: float | None
    resonance_hertz: float | None
    reachable: bool

    @property
    def known(self) -> bool:
        """True where all its figures could be computed."""
        return all(math.isfinite(x) for x in (self.volt_rms, self.volt_peak, self.volt_dc, self.hertz))

    @property
    def total_rms(self) -> float:
        """RMS of AC and DC together [V]: root of the sum of squares, never below either."""
        return math.hypot(self.volt_rms, self.volt_dc)


@dataclass(frozen=True, slots=True)
class CapacitorFact:
    """A capacitor in one state, worst over its box: largest capacitance and peak voltage (whole bank).

    `volt_dc_trapped`: direct voltage that stays after switch-off, None where none does; `has_discharge_path`:
    a path for direct current lies across it with all drives open; `discharge_ohm`: its largest resistance,
    None where it isn't known. `seconds`: (level [V], time [s] until it stays below that with the drives stopped, the
    slower of open and shorted, the longest found over the box), empty where it isn't known. `kind_family`: the family
    as declared. The drive's figures give the reason, where known.
    """

    part: str
    state: str
    farad: float
    volt_peak: float
    volt_dc_trapped: float | None
    has_discharge_path: bool
    discharge_ohm: float | None
    kind_family: str
    drive: str = ""
    drive_volt_peak: float | None = None
    gain: float | None = None
    resonance_hertz: float | None = None
    seconds: tuple[tuple[float, float], ...] = ()

    def seconds_to(self, level: float) -> float | None:
        """Computed time to a level [V], None where there is none."""
        return next((seconds for volt, seconds in self.seconds if volt == level), None)

    @property
    def known(self) -> bool:
        """True where all its figures could be computed."""
        trapped = self.volt_dc_trapped or 0.0
        return all(math.isfinite(x) for x in (self.farad, self.volt_peak, trapped))

    @property
    def volt(self) -> float:
        """Largest voltage that it can be left with [V]."""
        return max(abs(self.volt_peak), abs(self.volt_dc_trapped or 0.0))

    @property
    def joule(self) -> float:
        """Stored energy C V^2 / 2 at that voltage [J]. Source: circuit theory."""
        return 0.5 * self.farad * self.volt * self.volt


@dataclass(frozen=True, slots=True)
class Facts:
    """Everything the cautions look at. `access`: "ordinary" or "skilled"; the band of all drives [Hz]."""

    nodes: tuple[NodeFact, ...]
    capacitors: tuple[CapacitorFact, ...]
    access: str
    hertz_lowest: float
    hertz_highest: float
