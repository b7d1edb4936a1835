"""The page of the sources follows the study."""

from dash import Dash

from ergo.board.callbacks.answers import fill
from ergo.board.ids import Id
from ergo.board.layouts import sources
from ergo.board.room import Room


def register(app: Dash, room: Room) -> None:
    """Make the page work."""
    fill(app, room, Id.SOURCES_BODY, sources.body)
