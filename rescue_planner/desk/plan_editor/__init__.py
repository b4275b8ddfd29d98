"""Parts of the Plans page."""
