"""The application: made from settings, with nothing done at import."""

from flask import Flask

from service.settings import Settings
from service.web import catalogues, health, openapi, problems, routes
from service.web.negotiation import Untyped


def create_app(settings: Settings | None = None) -> Flask:
    """Return the application, its documents written and its routes in place."""
    settings = settings or Settings()
    app = Flask("fillmark", static_folder=None)
    app.response_class = Untyped  # what Flask itself answers is OPTIONS alone
    app.url_map.strict_slashes = False
    app.url_map.merge_slashes = False
    problems.register(app)
    routes.register(app, settings)
    catalogues.register(app, settings)
    openapi.register(app, settings)
    health.register(app)
    return app
