"""The intent file: what a board is meant to do, read, checked, and a first one written."""
