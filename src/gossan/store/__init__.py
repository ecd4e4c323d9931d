"""Result files: what they hold, how they are written and read."""
