"""Free text made harmless for people's eyes: nothing in it moves a cursor, hides or turns around what stands there."""

from __future__ import annotations

import unicodedata

_HIDDEN = ("Cc", "Cf", "Co", "Cs", "Cn", "Zl", "Zp")
"""Unicode categories without a shape: control, format (direction included), private, surrogate, line separators."""


def harmless(text: str, keep: str = "") -> str:
    """Text with every character that has no shape written as its code; `keep` are characters left alone."""
    if text.isascii() and text.isprintable():
        return text
    return "".join(c if c in keep or unicodedata.category(c) not in _HIDDEN else _code(c) for c in text)


def _code(character: str) -> str:
    return f"<U+{ord(character):04X}>"
