"""Results drawn: one view a file, one drawing language."""
