"""What is computed from a topology and its values."""
