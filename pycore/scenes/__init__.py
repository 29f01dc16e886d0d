"""Pictures as numbers and roles: shapes in prism dioptres, no pixel, no colour, no sentence."""
