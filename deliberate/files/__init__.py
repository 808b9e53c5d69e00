"""Reading and writing what lasts: scenario files. Decides nothing."""
