"""Many placements: compare, sweep, suggest."""
