"""The sections of the text form, one subject a file; each is lines for a page."""
