"""The study file: read, checked, frozen, written."""
