"""HiGHS without a word on the terminal: its banner is otherwise printed on construction."""

from __future__ import annotations

import highspy


class QuietHighs(highspy.Highs):  # type: ignore[misc]  # highspy has no type information
    """A HiGHS instance on one thread that never prints; callbacks still fire."""

    def __init__(self) -> None:
        super().__init__()
        self.setOptionValue("threads", 1)
        self.setOptionValue("random_seed", 0)

    def enableCallbacks(self) -> None:  # noqa: N802  # HiGHS's own name; called while constructing
        """Silence the terminal before the first line is logged."""
        self.setOptionValue("log_to_console", False)
        super().enableCallbacks()
