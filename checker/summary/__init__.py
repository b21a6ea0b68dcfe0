"""From figures to the report's records: every null gets its reason here."""
