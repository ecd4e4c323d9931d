"""From the text of a case to the problem it states."""
