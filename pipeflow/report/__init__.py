"""Pages made of results: terminal and JSON."""
