"""Every component id of the board: a member here, never a loose string."""

from enum import StrEnum


class Id(StrEnum):
    """Ids of single components."""

    PLACE = "place"
    PAGE = "page"
    THEME = "theme"
    THEME_SWITCH = "theme-switch"
    TAB = "tab"
    HEARD = "heard"
    EDIT = "edit"
    SEEN = "seen-change"
    ARRIVED = "arrived"
    DRAWN = "drawn"
    STATE_LINE = "state-line"
    TITLE = "study-title"
    VARIANT = "variant"
    UNDO = "undo"
    REDO = "redo"
    OPEN = "open"
    OPEN_BOX = "open-box"
    OPEN_CHOICE = "open-choice"
    UPLOAD = "upload"
    UPLOAD_SAYS = "upload-says"
    NEW = "new"
    SAVE = "save"
    SAVE_NAME = "save-name"
    SAVE_SAYS = "save-says"
    DOWNLOAD = "download"
    DOWNLOAD_TOML = "download-toml"
    CONFLICT = "conflict"
    CONFLICT_TAKE = "conflict-take"
    CONFLICT_KEEP = "conflict-keep"
    VALUES = "values"
    VALUES_PROBLEMS = "values-problems"
    BENCH_PICTURE = "bench-picture"
    PEOPLE_PICTURE = "people-picture"
    SPACE_PICTURE = "space-picture"
    SHEET = "sheet"
    CHART_PICTURE = "chart-picture"
    PEOPLE_DRAWN = "people-drawn"
    RATINGS = "ratings"
    VERDICT = "verdict"
    POINTER = "pointer"
    POINTER_SAYS = "pointer-says"
    CAUTIONS = "cautions"
    ENGINE_SAYS = "engine-says"
    ENGINE_TICK = "engine-tick"


class Part(StrEnum):
    """The `type` of ids that come in many: one a study key, one a row."""

    VALUE = "value"
    SLIDER = "slider"
    PROBLEM = "problem"
    ADD = "add"
    REMOVE = "remove"
    SHIPPED = "shipped"
    KEPT = "kept"
    TABLE = "table"
    EXPORT = "export"


def of(part: Part, path: str) -> dict[str, str]:
    """Return the id of one of many components."""
    return {"type": str(part), "path": path}
