"""Reports of reviews and of comparisons."""
