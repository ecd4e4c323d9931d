"""Where transport meets chemistry: the march in time."""
