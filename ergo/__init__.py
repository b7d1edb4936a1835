"""Pullward: is a hand lever in the right place?"""

__version__ = "0.1.0"
