"""The checks across fields, one module a subject; each reads the plain case and yields problems."""
