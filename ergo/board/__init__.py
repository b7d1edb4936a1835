"""The board in the browser."""
