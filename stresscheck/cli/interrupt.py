"""Ctrl-C while searching, and a word to a waiting person that work goes on."""

from __future__ import annotations

import signal
import sys
import time
from types import TracebackType


class Interrupt:
    """Within it, the first Ctrl-C ends the search and lets the report be written; the second ends the program."""

    def __init__(self) -> None:
        self.seen = False
        self.start = self.told = time.monotonic()

    def __enter__(self) -> Interrupt:
        self.before = signal.signal(signal.SIGINT, self._first)
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        signal.signal(signal.SIGINT, self.before)

    def _first(self, number: int, frame: object) -> None:
        self.seen = True
        signal.signal(signal.SIGINT, signal.default_int_handler)
        print("ending the search; once more to end without a report", file=sys.stderr)

    def asked(self) -> bool:
        """Whether to end; called all the time while searching, so it also tells a waiting person that work goes on."""
        now = time.monotonic()
        if now - self.told > 1.0 and sys.stderr.isatty():
            self.told = now
            print(f"searching and proving, {now - self.start:.0f} s", file=sys.stderr)
        return self.seen
