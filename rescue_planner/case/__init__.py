"""What the user describes: frozen, validated types with units, edits, and the case file."""
