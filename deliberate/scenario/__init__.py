"""The meeting as immutable values, and the edits on them."""
