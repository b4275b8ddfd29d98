"""Compiled inner loops on plain arrays; the plain twins live in `theory`."""
