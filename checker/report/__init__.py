"""Forms of the report. Formatting only: nothing here computes a figure."""
