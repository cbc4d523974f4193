"""What the sky sends, and what a photovoltaic module makes of it."""
