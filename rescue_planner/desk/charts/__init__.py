"""Charts: small multiples that draw what `rescue_planner.projection.picture` describes."""
