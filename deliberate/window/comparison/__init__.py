"""Variants of the meeting laid side by side: on one chart, and figure by figure in a table."""

from deliberate.window.comparison.dialog import ComparisonDialog

__all__ = ["ComparisonDialog"]
