"""The last resort: an exception nobody caught keeps the work first, then is told once, and the window goes on."""

from __future__ import annotations

import sys
import time
import traceback
from collections.abc import Callable
from types import TracebackType

from reliability_app.engine.cautions import Severity
from reliability_app.session.messages import Messages

# An exception in a paint or timer event comes back many times a second: the same one is handled this often only.
AGAIN_AFTER_S = 30.0
# And of all together no more in that time, or the window would do nothing else.
_MOST_AT_ONCE = 5

Clock = Callable[[], float]


class LastResort:
    """Handles exceptions that nobody caught, those of Qt slots among them.

    `rescue` keeps the work and returns a sentence on what was kept; it comes first, for the next fault may end it all.
    """

    def __init__(self, rescue: Callable[[], str], messages: Messages, clock: Clock = time.monotonic) -> None:
        self._rescue, self._messages, self._clock = rescue, messages, clock
        self._handled: dict[str, float] = {}
        self._is_handling = False

    def __call__(self, kind: type[BaseException], trouble: BaseException, trace: TracebackType | None) -> None:
        """Handle one exception; this is what `sys.excepthook` calls."""
        if issubclass(kind, KeyboardInterrupt):
            sys.__excepthook__(kind, trouble, trace)
            return
        # A fault in here must not lead here again.
        if self._is_handling or not self._is_due(kind, trace):
            return
        self._is_handling = True
        try:
            kept = self._kept()
            traceback.print_exception(kind, trouble, trace)
            self._messages.say(
                Severity.SERIOUS, f"Something went wrong inside the program ({kind.__name__}: {trouble}). {kept}"
            )
        except Exception as second:  # said where it can still be said
            traceback.print_exception(second)
        finally:
            self._is_handling = False

    def _kept(self) -> str:
        try:
            return self._rescue()
        except Exception as trouble:  # the fault that is being handled may be the same
            traceback.print_exception(trouble)
            return "Your work could not be kept in a recovery copy: save it now under another name."

    def _is_due(self, kind: type[BaseException], trace: TracebackType | None) -> bool:
        now = self._clock()
        self._handled = {place: when for place, when in self._handled.items() if now - when < AGAIN_AFTER_S}
        place = f"{kind.__name__} {_raised_at(trace)}"
        if place in self._handled or len(self._handled) >= _MOST_AT_ONCE:
            return False
        self._handled[place] = now
        return True


def install_last_resort(rescue: Callable[[], str], messages: Messages) -> None:
    """Have uncaught exceptions, also those in Qt slots, rescue the work and be told in the window."""
    sys.excepthook = LastResort(rescue, messages)


def _raised_at(trace: TracebackType | None) -> str:
    frames = traceback.extract_tb(trace)
    return f"{frames[-1].filename}:{frames[-1].lineno}" if frames else ""
