"""Beliefs by round, the spread, the limit, and the ballot of every round."""

from deliberate.window.chart.panel import ChartPanel

__all__ = ["ChartPanel"]
