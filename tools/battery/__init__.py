"""Random waters by the thousand, every answer judged; `python -m tools.battery --help`."""
