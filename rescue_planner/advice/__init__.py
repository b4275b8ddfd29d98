"""What results say about targets, trade-offs and choices."""
