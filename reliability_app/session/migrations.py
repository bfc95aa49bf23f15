"""Brings the content of a session file of any earlier version up to the current one, a step per version.

When the version rises: raise `VERSION` in json_schema_types, add the step from the version before to `STEPS`,
and put a file saved by the last program of that version under tests/session/old_versions/. Steps are never
changed afterwards, and they touch plain content only, so that they do not depend on definitions that change.
A step meets whatever stands in a file: what is not as it expects it leaves alone, for the validation to refuse.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from reliability_app.session.json_schema_types import VERSION

Content = dict[str, Any]
Step = Callable[[Content], Content]

STEPS: Mapping[int, Step] = {}
"""For each earlier version the step that leads to the next one."""


def to_current(content: Content, *, steps: Mapping[int, Step] = STEPS, current: int = VERSION) -> Content:
    """Give `content`, whose "version" lies between 1 and `current`, as a file of version `current` holds it.

    Numbers and values of unknown keys are `JsonText`; steps pass on what they do not know.
    """
    for version in range(int(content["version"]), current):
        content = {**steps[version](content), "version": version + 1}
    return content
