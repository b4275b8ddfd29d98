"""Case and plan to measures over time, at the depths of projection."""
