"""A case sampled over what its inputs may be."""
