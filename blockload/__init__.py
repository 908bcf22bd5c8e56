"""blockload decides whether an engine block can be a piece of the chassis."""

__version__ = "0.1.0"
