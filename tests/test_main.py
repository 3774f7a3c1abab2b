"""The command: its options, its environment, and how it ends when it cannot start."""

import socket
import subprocess
import sys

import pytest

import service
from service.__main__ import main, parser, settings_of


def test_options_overrule_the_environment():
    stated = parser().parse_args(["serve", "--port", "9000", "--workers", "3"])
    settings = settings_of(stated, {"FILLMARK_PORT": "8001", "FILLMARK_THREADS": "5"})
    assert (settings.port, settings.workers, settings.threads) == (9000, 3, 5)


def test_a_wrong_option_ends_with_one_line_and_status_2(capsys):
    assert main(["serve", "--port", "http"]) == 2
    printed = capsys.readouterr()
    assert printed.out == ""
    assert printed.err.startswith("fillmark: ") and printed.err.count("\n") == 1


def test_a_port_in_use_ends_with_one_line_and_status_2(capsys):
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        assert main(["serve", "--port", str(taken.getsockname()[1])]) == 2
    assert "in use" in capsys.readouterr().err


@pytest.mark.parametrize("host", ["no-such-host.invalid", "\u00e9" * 100])
def test_a_host_that_is_none_ends_with_one_line_and_status_2(host, capsys):
    assert main(["serve", "--host", host, "--port", "0"]) == 2
    printed = capsys.readouterr().err
    assert printed.startswith("fillmark: cannot listen on") and printed.count("\n") == 1


def test_the_version_is_that_of_the_distribution(capsys):
    with pytest.raises(SystemExit) as ended:
        main(["--version"])
    assert ended.value.code == 0
    assert capsys.readouterr().out == f"fillmark {service.VERSION}\n"


def test_the_module_is_the_command():
    shown = subprocess.run(
        [sys.executable, "-m", "service", "serve", "--help"], capture_output=True, text=True, check=True
    )
    assert "--workers" in shown.stdout and "FILLMARK_PORT" in shown.stdout
