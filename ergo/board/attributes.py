"""HTML attributes with a dash in their name, as Dash's components take them."""

from typing import Any


def attributes(**pairs: Any) -> dict[str, Any]:
    """Return `aria_label="..."` and the like as `aria-label`."""
    return {name.replace("_", "-"): value for name, value in pairs.items()}
