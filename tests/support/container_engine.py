"""The image, really built and run where there is no container service and no image registry.

Debian's buildah, podman and runc do it, as root, on a base image that debootstrap makes on the spot: Debian's own
Python stands in for the published base that the Dockerfile names. That proves the Dockerfile's steps and the hardened
run, not the published base.

    apt-get install --no-install-recommends buildah podman runc debootstrap
    python -m pytest tests/container

The base is kept for the next run under $XDG_CACHE_HOME (else ~/.cache), by a hash of its recipe. Proxy and registry
settings are the machine's own, taken from the environment.
"""

import hashlib
import json
import os
import platform
import re
import shutil
import socket
import subprocess
import time
import urllib.error
import urllib.request
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
PROGRAMS = ("buildah", "podman", "runc", "debootstrap")
IMAGE = "localhost/fillmark:test"
BASE = "localhost/base"
BASE_SUITE = "trixie"
BASE_PACKAGES = "ca-certificates,python3,python3-venv"
PIP_SETTINGS = ("PIP_INDEX_URL", "PIP_EXTRA_INDEX_URL", "PIP_TRUSTED_HOST", "PIP_PROXY", "PIP_DEFAULT_TIMEOUT")

# Without systemd: cgroups by file, no journal. crun needs more rights than a container in a container has.
ENGINE_SETTINGS = """\
[containers]
default_ulimits = ["nofile=1024:1024", "nproc=512:512"]
[engine]
cgroup_manager = "cgroupfs"
events_logger = "file"
runtime = "runc"
"""

HARDENED = (
    "--pull=never",
    "--health-interval=disable",  # no timers without systemd; the tests run the check themselves
    "--memory=256m",
    "--pids-limit=64",
    "--read-only",
    "--cap-drop=ALL",
    "--security-opt=no-new-privileges",
    "--tmpfs=/tmp:rw,size=16m,noexec",
)


class Container:
    """A container that the tests started."""

    def __init__(self, engine: "Engine", name: str, port: int, start_time: float) -> None:
        self.engine, self.name, self.port, self.start_time = engine, name, port, start_time

    def run_inside(self, *command: str, environment: tuple[str, ...] = ()) -> subprocess.CompletedProcess[str]:
        """Run a command in the container."""
        settings = [f"--env={setting}" for setting in environment]
        return self.engine.podman("exec", *settings, self.name, *command, check=False)

    def request(self, path: str, body: object = None) -> tuple[int, dict[str, object]]:
        """Send a GET, or a POST of a body, from outside, and return the status and the JSON answer."""
        data = None if body is None else json.dumps(body).encode()
        headers = {"Content-Type": "application/json"}
        request = urllib.request.Request(f"http://127.0.0.1:{self.port}{path}", data, headers)
        try:
            with urllib.request.urlopen(request, timeout=10) as answer:
                return answer.status, json.load(answer)
        except urllib.error.HTTPError as error:
            with error:
                return error.code, json.load(error)

    def wait_until_ready(self, within: float) -> float:
        """Wait for ``/readyz`` to answer 200 and return the seconds since the start was asked for."""
        while time.monotonic() < self.start_time + within:
            try:
                if self.request("/readyz")[0] == 200:
                    return time.monotonic() - self.start_time
            except (urllib.error.URLError, ConnectionError):
                time.sleep(0.02)
        pytest.fail(f"not ready within {within} s:\n{self.log()}")

    def log(self) -> str:
        """Return what the container has written so far."""
        result = self.engine.podman("logs", self.name)
        return result.stdout + result.stderr

    def stop(self, within: int = 10) -> int:
        """Send the image's stop signal and return the exit code; 137 if it had to be killed."""
        self.engine.podman("stop", f"--time={within}", self.name)
        return int(self.engine.podman("inspect", "--format={{.State.ExitCode}}", self.name).stdout)


class Engine:
    """Buildah and podman with a storage of their own in a temporary folder."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        self.storage = (f"--root={folder}/storage", f"--runroot={folder}/run", "--storage-driver=vfs")
        settings = folder / "containers.conf"
        settings.write_text(ENGINE_SETTINGS)
        self.environment = os.environ | {"CONTAINERS_CONF": str(settings)}

    def podman(self, *arguments: str, check: bool = True) -> subprocess.CompletedProcess[str]:
        """Run a podman command."""
        return self._run(("podman", *self.storage, *arguments), check, timeout=60)

    def build(self) -> None:
        """Build the image as the Dockerfile says, on the stand-in for its base."""
        published = re.search(r"^ARG BASE=(\S+)$", (ROOT / "Dockerfile").read_text(), re.MULTILINE)
        assert published, "the Dockerfile names its base in ARG BASE"
        self.podman("import", str(_base()), BASE)
        self.podman("tag", BASE, published[1])
        mounts = {_certificates(): "/etc/ssl/certs/ca-certificates.crt", self._pip_settings(): "/etc/pip.conf"}
        volumes = [f"--volume={outside}:{inside}:ro" for outside, inside in mounts.items()]
        options = ("--pull-never", "--network=host", "--isolation=chroot", "--format=docker", f"--tag={IMAGE}")
        self._run(("buildah", *self.storage, "bud", *options, *volumes, str(ROOT)), check=True, timeout=540)

    def start(self, name: str, *options: str) -> Container:
        """Start a hardened container of the image on a free port of the loopback."""
        port = _free_port()
        settings = ("--env=FILLMARK_HOST=127.0.0.1", f"--env=FILLMARK_PORT={port}")
        self.podman("create", f"--name={name}", *HARDENED, *settings, *options, IMAGE)
        start_time = time.monotonic()
        self.podman("start", name)
        return Container(self, name, port, start_time)

    def remove_all(self) -> None:
        """Stop and remove every container, and give the storage back."""
        self.podman("rm", "--all", "--force", "--time=0", check=False)
        shutil.rmtree(self.folder, ignore_errors=True)

    def _pip_settings(self) -> Path:
        """Write the machine's pip settings where the build can read them, and the image does not keep them."""
        lines = [
            f"{name.removeprefix('PIP_').lower().replace('_', '-')} = {os.environ[name]}"
            for name in PIP_SETTINGS
            if name in os.environ
        ]
        path = self.folder / "pip.conf"
        path.write_text("\n".join(["[global]", *lines, ""]))
        return path

    def _run(self, command: tuple[str, ...], check: bool, timeout: float) -> subprocess.CompletedProcess[str]:
        result = subprocess.run(command, env=self.environment, capture_output=True, text=True, timeout=timeout)
        if check and result.returncode != 0:
            pytest.fail(
                f"{' '.join(command)}\nexit {result.returncode}\n{result.stdout[-4000:]}{result.stderr[-4000:]}"
            )
        return result


def _certificates() -> Path:
    return Path(os.environ.get("PIP_CERT") or "/etc/ssl/certs/ca-certificates.crt")


def _free_port() -> int:
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return int(probe.getsockname()[1])


def _base() -> Path:
    """Return the archive of the stand-in base, made once for each recipe."""
    recipe = "|".join((BASE_SUITE, BASE_PACKAGES, platform.machine()))
    cache = Path(os.environ.get("XDG_CACHE_HOME") or Path.home() / ".cache") / "fillmark"
    archive = cache / f"base-{hashlib.sha256(recipe.encode()).hexdigest()[:16]}.tar"
    if archive.exists():
        return archive
    cache.mkdir(parents=True, exist_ok=True)
    root, unfinished = cache / f"base-{os.getpid()}", archive.with_suffix(f".{os.getpid()}")
    try:
        recipe_options = ("--variant=minbase", f"--include={BASE_PACKAGES}")
        subprocess.run(("debootstrap", *recipe_options, BASE_SUITE, str(root)), check=True, timeout=540)
        (root / "usr/bin/python").symlink_to("python3")  # as in the published base
        subprocess.run(("tar", "-C", str(root), "-cf", str(unfinished), "."), check=True)
        unfinished.rename(archive)
    finally:
        shutil.rmtree(root, ignore_errors=True)
        unfinished.unlink(missing_ok=True)
    return archive
