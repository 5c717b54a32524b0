"""On which line each key of a TOML text stands. Walks only text that tomllib has accepted; built when needed."""

from __future__ import annotations

import tomllib

KeyPath = tuple[str, ...]


def key_lines(text: str) -> dict[KeyPath, int]:
    """Key path → line, counted from 1, for every table header and every key, inside inline tables too.

    Arrays of tables don't occur in this format; their headers count for the path without an index. Strings,
    comments and nesting are skipped by TOML's own rules (TOML 1.0.0).
    """
    return _Walk(text).run()


class Lines:
    """Lines of the keys of one text; the text is walked when the first line is asked for."""

    def __init__(self, text: str) -> None:
        self._text = text
        self._lines: dict[KeyPath, int] | None = None

    def of(self, path: KeyPath) -> int | None:
        """Line of a key, or of the nearest table around it; None for the top of the file."""
        if self._lines is None:
            self._lines = key_lines(self._text)
        while path and path not in self._lines:
            path = path[:-1]
        return self._lines.get(path)


class _Walk:
    """A cursor over the text; lives only inside `key_lines`."""

    def __init__(self, text: str) -> None:
        self.text = text.replace("\r\n", "\n")
        self.at = 0
        self.line = 1
        self.found: dict[KeyPath, int] = {}

    def run(self) -> dict[KeyPath, int]:
        table: KeyPath = ()
        while True:
            self._blank(newlines=True)
            if self.at >= len(self.text):
                return self.found
            if self.text[self.at] == "[":
                depth = 2 if self.text.startswith("[[", self.at) else 1
                self._step(depth)
                table = self._key()
                self._step(depth)
                self._note(table)
            else:
                self._pair(table)

    def _pair(self, table: KeyPath) -> None:
        path = (*table, *self._key())
        self._note(path)
        self._step(1)  # =
        self._blank(newlines=False)
        self._value(path)

    def _note(self, path: KeyPath) -> None:
        for length in range(1, len(path) + 1):
            self.found.setdefault(path[:length], self.line)
        self.found[path] = self.line

    def _step(self, count: int) -> None:
        for _ in range(count):
            if self.text[self.at] == "\n":
                self.line += 1
            self.at += 1

    def _blank(self, *, newlines: bool) -> None:
        while self.at < len(self.text):
            c = self.text[self.at]
            if c in " \t" or (newlines and c == "\n"):
                self._step(1)
            elif c == "#":
                while self.at < len(self.text) and self.text[self.at] != "\n":
                    self._step(1)
            else:
                return

    def _key(self) -> KeyPath:
        """Dotted key up to = or ]."""
        parts: list[str] = []
        while True:
            self._blank(newlines=False)
            parts.append(self._bare_or_quoted())
            self._blank(newlines=False)
            if self.text[self.at] != ".":
                return tuple(parts)
            self._step(1)

    def _bare_or_quoted(self) -> str:
        start = self.at
        if self.text[self.at] in "\"'":
            self._string()
            return str(tomllib.loads("k = " + self.text[start : self.at])["k"])
        while self.text[self.at].isalnum() or self.text[self.at] in "_-":
            self.at += 1
        return self.text[start : self.at]

    def _string(self) -> None:
        quote = self.text[self.at]
        mark = quote * 3 if self.text.startswith(quote * 3, self.at) else quote
        self._step(len(mark))
        while not self.text.startswith(mark, self.at):
            self._step(2 if self.text[self.at] == "\\" and quote == '"' else 1)
        self._step(len(mark))
        while len(mark) == 3 and self.at < len(self.text) and self.text[self.at] == quote:
            self._step(1)  # up to two quotes may belong to the end of the string

    def _value(self, path: KeyPath) -> None:
        c = self.text[self.at]
        if c in "\"'":
            self._string()
        elif c == "[":
            self._list(path)
        elif c == "{":
            self._inline(path)
        else:
            while self.at < len(self.text) and self.text[self.at] not in ",]}#\n":
                self.at += 1

    def _list(self, path: KeyPath) -> None:
        self._step(1)
        while True:
            self._blank(newlines=True)
            if self.text[self.at] == "]":
                return self._step(1)
            if self.text[self.at] == ",":
                self._step(1)
                continue
            self._value(path)

    def _inline(self, path: KeyPath) -> None:
        self._step(1)
        while True:
            self._blank(newlines=True)
            if self.text[self.at] == "}":
                return self._step(1)
            if self.text[self.at] == ",":
                self._step(1)
                continue
            self._pair(path)
