"""What each page shows; a file of the same name in `callbacks` makes it work."""

from ergo.board.layouts import bench, left_out, let_go, opening, placements, search, sources, take_away

__all__ = ["bench", "left_out", "let_go", "opening", "placements", "search", "sources", "take_away"]
