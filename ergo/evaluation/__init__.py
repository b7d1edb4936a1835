"""Where person and machine meet: at the handle."""
