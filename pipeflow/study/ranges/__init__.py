"""A case over ranges of its inputs: sweeps and the duty envelope."""
