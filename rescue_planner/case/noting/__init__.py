"""The remarks that need no projection, one module a subject."""
