"""Parts of the Compare page."""
