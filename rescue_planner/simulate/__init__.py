"""The animal-by-animal engine: takes plain arrays, knows `theory` and `kernels`."""
