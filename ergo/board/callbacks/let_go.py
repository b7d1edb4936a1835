"""The page of the let-go follows the study."""

from dash import Dash

from ergo.board.callbacks.answers import fill
from ergo.board.ids import Id
from ergo.board.layouts import let_go
from ergo.board.room import Room


def register(app: Dash, room: Room) -> None:
    """Make the page work."""
    fill(app, room, Id.LET_GO_BODY, let_go.body)
