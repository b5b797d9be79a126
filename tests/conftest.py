"""How the tests are shared out where several processes run them."""

from __future__ import annotations

import pytest


def pytest_collection_modifyitems(config: pytest.Config, items: list[pytest.Item]) -> None:
    """Keep the tests of a file together, for their fixtures, and all tests of editors, which take turns."""
    if not config.pluginmanager.hasplugin("xdist"):
        return
    for item in items:
        group = "editors" if "editors" in item.path.parts else str(item.path)
        item.add_marker(pytest.mark.xdist_group(group))
