"""One JSON object a line; no NaN, no Infinity."""

from __future__ import annotations

import json
from typing import Any


def render_json(plain: Any) -> str:
    """Write plain data on one line, with its line end."""
    return json.dumps(plain, ensure_ascii=True, allow_nan=False, separators=(", ", ": ")) + "\n"
