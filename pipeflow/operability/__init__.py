"""Will the line run: limits held against results, and what an engineer must be told beside the numbers."""
