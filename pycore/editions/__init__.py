"""Editions of standards and local law as data: limits with their clause and provenance."""
