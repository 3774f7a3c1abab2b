"""fillmark: the electron gas of real conductors as a REST service."""
