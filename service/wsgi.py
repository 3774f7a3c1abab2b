"""The application for any WSGI server, with the settings of the environment."""

import os

# Before NumPy is imported: threads of a numerical library would starve the other workers.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

from service.settings import Settings
from service.web.app import create_app

app = create_app(Settings.from_environ(os.environ))
