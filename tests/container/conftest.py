"""One engine, one image and one serving container for all the tests here."""

import os
import shutil
from collections.abc import Iterator

import pytest

from container_engine import PROGRAMS, Container, Engine


@pytest.fixture(scope="session")
def engine(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Engine]:
    """The engine, with the image built."""
    missing = [program for program in PROGRAMS if shutil.which(program) is None]
    if missing:
        pytest.skip(f"not installed: {', '.join(missing)}")
    if os.geteuid() != 0:
        pytest.skip("debootstrap and chroot need root")
    engine = Engine(tmp_path_factory.mktemp("engine"))
    try:
        engine.build()
        yield engine
    finally:
        engine.remove_all()


@pytest.fixture(scope="session")
def container(engine: Engine) -> Container:
    """A hardened container that listens on the loopback, ready."""
    container = engine.start("serving", "--network=host")
    container.wait_until_ready(within=10)
    return container
