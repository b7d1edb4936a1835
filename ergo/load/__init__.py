"""What resists the slide: one load a file."""
