"""A drawing set against its schedule of declared values: verdicts, likely causes, workers, journal."""
