"""What is handed in: figures, tables, documents and the run record."""
