"""The commands: one a file, heavy imports inside."""
