"""Water and solutes on their way through a column."""
