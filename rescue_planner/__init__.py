"""Plan the genetic rescue of a small, isolated, inbred population."""

__version__ = "0.1.0"
