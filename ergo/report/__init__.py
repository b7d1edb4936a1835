"""The reasoning written down for the design file."""
