"""The application for any WSGI server, with the settings of the environment."""

import os

from service.settings import Settings
from service.web.app import create_app

app = create_app(Settings.from_environ(os.environ))
