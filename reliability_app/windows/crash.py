"""The last resort: an exception nobody caught keeps the work first, then is told once, and the window goes on."""

from __future__ import annotations

import sys
import traceback
from collections.abc import Callable
from types import TracebackType

from reliability_app.engine.cautions import Severity
from reliability_app.session.messages import Messages

# An exception in a paint or timer event comes back many times a second; it is told this often only.
_MOST_TOLD = 3


def install_last_resort(rescue: Callable[[], None], messages: Messages) -> None:
    """Have uncaught exceptions, also those in Qt slots, rescue the work and be told in the window."""
    told = 0

    def handle(kind: type[BaseException], trouble: BaseException, trace: TracebackType | None) -> None:
        nonlocal told
        if issubclass(kind, KeyboardInterrupt):
            sys.__excepthook__(kind, trouble, trace)
            return
        told += 1
        if told > _MOST_TOLD:
            return
        try:
            rescue()
        finally:
            traceback.print_exception(kind, trouble, trace)
            messages.say(
                Severity.SERIOUS,
                f"Something went wrong inside the program ({kind.__name__}: {trouble}). Your work was kept in a "
                "recovery copy: save it, and start Rigpaper anew.",
            )

    sys.excepthook = handle
