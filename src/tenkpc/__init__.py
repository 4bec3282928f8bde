"""Forecasts what a detector records when a core-collapse supernova goes off nearby."""

__version__ = "0.1.0"
