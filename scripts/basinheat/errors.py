"""Faults a user can mend: shown as plain lines, never as a traceback."""


class UserError(Exception):
    """One or several faults in a user's config or input, each a line of its own.

    Parameters
    ----------
    faults : str or list of str
        One sentence per fault: what, where, the value, the rule and the way out.
    heading : str, optional
        A first line that says what the faults have in common.
    """

    def __init__(self, faults: str | list[str], heading: str = "") -> None:
        self.faults = [_line(fault) for fault in ([faults] if isinstance(faults, str) else faults)]
        self.heading = _line(heading)
        super().__init__(str(self))

    def __str__(self) -> str:
        """Return the heading and the faults, one a line."""
        if not self.heading:
            return "\n".join(self.faults)
        return "\n".join([self.heading, *(f"  {fault}" for fault in self.faults)])


def _line(text: str) -> str:
    """Return text as one line that can be seen: what breaks, turns or hides it becomes an escape.

    Names and values in a fault come from the user's files.
    """
    if text.isprintable():
        return text
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode() for c in text)
