"""The command line: one thin command a file."""
