"""How long a bed of sediment or reactive mix holds back the metals of mine water, and why."""

__version__ = "0.1.0"
