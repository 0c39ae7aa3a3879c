"""At which line of a TOML text each key stands, so that a message can say it.

The standard parser tells no positions. The text has been through that parser already, so this
walk may take it for granted that the text is valid.
"""

from __future__ import annotations

import re

KeyPath = tuple[str | int, ...]

_KEY = re.compile(r"""[ \t]*(?:"((?:[^"\\]|\\.)*)"|'([^']*)'|([A-Za-z0-9_-]+))[ \t]*""")
_BLANK = re.compile(r"(?:[\s,]|#[^\n]*)*")
_STRING = re.compile(
    r'"""(?:[^"\\]+|\\.|"(?!""))*"{3,5}'
    r"|'''(?:[^']+|'(?!''))*'{3,5}"
    r'|"(?:[^"\\\n]|\\.)*"'
    r"|'[^'\n]*'",
    re.DOTALL,
)
_BARE = re.compile(r"[^\s,\]}#]+(?: \d\d:\d\d[^\s,\]}#]*)?")


def key_lines(text: str) -> dict[KeyPath, int]:
    """Return the line, counted from 1, of every key, table and list entry.

    Parameters
    ----------
    text : str
        A valid TOML document.

    Returns
    -------
    dict
        From path (keys and list indices counted from 0) to line. Where a path is met more than
        once, as a table that is opened in parts, the first line stands.
    """
    return _Walk(text).run()


def line_of(lines: dict[KeyPath, int], path: KeyPath) -> int | None:
    """Return the line of a path, or of the nearest table around it; None when none is known."""
    for end in range(len(path), 0, -1):
        if path[:end] in lines:
            return lines[path[:end]]
    return None


class _Walk:
    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.line = 1
        self.lines: dict[KeyPath, int] = {}
        self.counts: dict[KeyPath, int] = {}

    def run(self) -> dict[KeyPath, int]:
        table: KeyPath = ()
        self.skip(_BLANK)
        while self.at < len(self.text):
            if self.text.startswith("[", self.at):
                table = self.header()
            else:
                self.assignment(table)
            self.skip(_BLANK)
        return self.lines

    def skip(self, pattern: re.Pattern[str]) -> bool:
        found = pattern.match(self.text, self.at)
        if found is None or found.end() == self.at:
            return False
        self.line += found[0].count("\n")
        self.at = found.end()
        return True

    def note(self, path: KeyPath) -> None:
        self.lines.setdefault(path, self.line)

    def dotted_key(self) -> tuple[str, ...]:
        parts: list[str] = []
        while True:
            found = _KEY.match(self.text, self.at)
            if found is None:
                return tuple(parts)
            parts.append(next(group for group in found.groups() if group is not None))
            self.at = found.end()
            if not self.text.startswith(".", self.at):
                return tuple(parts)
            self.at += 1

    def inside_lists(self, keys: tuple[str, ...]) -> KeyPath:
        """Return a header's path with the index of the last entry of each list it passes."""
        path: KeyPath = ()
        for key in keys:
            path = (*path, key)
            self.note(path)
            if path in self.counts:
                path = (*path, self.counts[path] - 1)
        return path

    def header(self) -> KeyPath:
        is_list = self.text.startswith("[[", self.at)
        self.at += 2 if is_list else 1
        keys = self.dotted_key()
        self.at += 2 if is_list else 1
        if is_list:
            path = (*self.inside_lists(keys[:-1]), keys[-1])
            self.note(path)
            self.counts[path] = self.counts.get(path, 0) + 1
            path = (*path, self.counts[path] - 1)
        else:
            path = self.inside_lists(keys)
        self.note(path)
        return path

    def assignment(self, table: KeyPath) -> None:
        path = table
        for key in self.dotted_key():
            path = (*path, key)
            self.note(path)
        self.at += 1  # the equals sign
        self.value(path)

    def value(self, path: KeyPath) -> None:
        self.skip(_BLANK)
        opening = self.text[self.at : self.at + 1]
        if opening in {"[", "{"}:
            self.at += 1
            self.container(path, "]" if opening == "[" else "}")
        elif not self.skip(_STRING) and not self.skip(_BARE):
            self.at = len(self.text)

    def container(self, path: KeyPath, closing: str) -> None:
        count = 0
        self.skip(_BLANK)
        while self.at < len(self.text) and self.text[self.at] != closing:
            if closing == "]":
                self.note((*path, count))
                self.value((*path, count))
                count += 1
            else:
                self.assignment(path)
            self.skip(_BLANK)
        self.at += 1
