"""The pages of the desk. They do not know each other."""
