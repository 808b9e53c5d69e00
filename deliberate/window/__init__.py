"""The window: shows values, asks for edits, computes nothing."""
