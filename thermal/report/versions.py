"""Versions of what computed a result."""

import platform
from importlib.metadata import PackageNotFoundError, version

DISTRIBUTION = "workpiece-heating"


def own_version() -> str:
    """Version of this package; "not installed" where it runs from a bare folder."""
    try:
        return version(DISTRIBUTION)
    except PackageNotFoundError:
        return "not installed"


def versions() -> dict[str, str]:
    """Versions of this package, Python and the libraries the numbers depend on."""
    found = {"thermal": own_version(), "python": platform.python_version()}
    return found | {name: version(name) for name in ("numpy", "scipy")}
