"""Reading back what a page carries."""

from __future__ import annotations

import json
import re
from typing import Any

import pytest


def carried(html: str, name: str) -> Any:
    """JSON that a page carries in a script element."""
    found = re.search(rf'<script type="application/json" id="{name}">(.*?)</script>', html, re.DOTALL)
    assert found
    return json.loads(found.group(1), parse_constant=lambda word: pytest.fail(f"{word} in the page"))
