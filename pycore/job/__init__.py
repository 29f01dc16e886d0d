"""What is written down at the bench, as frozen values, and how each is read from text."""
