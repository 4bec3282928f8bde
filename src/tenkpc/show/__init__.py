"""Pictures of forecasts."""
