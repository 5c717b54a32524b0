"""Lines of text with a tone, wrapped to a width: what the terminal formats are made of."""

from __future__ import annotations

import textwrap
from dataclasses import dataclass, field

from stresscheck.report.plain_text import harmless

TONES = {"plain": "", "head": "bold", "grave": "bold reverse", "open": "bold underline", "quiet": "dim"}
"""Tones and how a terminal shows them: by weight and frame, never by hue alone."""


@dataclass(slots=True)
class Lines:
    """Collects lines; nothing is cut, long ones are folded with a hanging indent."""

    width: int
    items: list[tuple[str, str]] = field(default_factory=list)

    def add(self, text: str = "", indent: int = 0, hang: int = 2, tone: str = "plain") -> None:
        """One paragraph, folded to the width."""
        if not text:
            self.items.append(("", "plain"))
            return
        folded = textwrap.wrap(
            clean(text), max(20, self.width), initial_indent=" " * indent, subsequent_indent=" " * (indent + hang),
            break_on_hyphens=False,
        )  # fmt: skip
        self.items.extend((line, tone) for line in folded)

    def fixed(self, text: str, tone: str = "plain") -> None:
        """One line as it stands."""
        self.items.append((harmless(text.rstrip()), tone))

    def text(self, *, color: bool) -> str:
        """All lines; with `color`, tones as escape codes of the terminal."""
        if not color:
            return "\n".join(line for line, _ in self.items) + "\n"
        return _styled(self.items, self.width)


def clean(text: str) -> str:
    """Text without line feeds and tabs, for one paragraph; characters without a shape are shown by their code."""
    return harmless(" ".join(text.splitlines()).replace("\t", " ").strip())


def _styled(items: list[tuple[str, str]], width: int) -> str:
    from io import StringIO

    from rich.console import Console
    from rich.text import Text

    out = StringIO()
    console = Console(file=out, force_terminal=True, width=max(width, 20), highlight=False, soft_wrap=True)
    for line, tone in items:
        console.print(Text(line, style=TONES[tone]))
    return out.getvalue()
