"""The page of who is left out follows the study."""

from dash import Dash

from ergo.board.callbacks.answers import fill
from ergo.board.ids import Id
from ergo.board.layouts import left_out
from ergo.board.room import Room


def register(app: Dash, room: Room) -> None:
    """Make the page work."""
    fill(app, room, Id.LEFT_OUT_BODY, left_out.body)
