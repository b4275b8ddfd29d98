"""Published formulas as pure functions on numbers and arrays."""
