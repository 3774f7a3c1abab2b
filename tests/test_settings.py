"""Settings: defaults, each variable, and one clear line for each that is wrong."""

from dataclasses import fields

import pytest

from service.errors import SettingsError
from service.settings import Settings


def test_an_empty_environment_gives_the_defaults():
    assert Settings.from_environ({"PATH": "/bin"}) == Settings()
    assert Settings().host == "127.0.0.1"


@pytest.mark.parametrize("name", [field.name for field in fields(Settings)])
def test_every_setting_has_its_variable(name):
    text = "localhost" if name == "host" else "4096"
    assert (
        str(getattr(Settings.from_environ({f"FILLMARK_{name.upper()}": text}), name)) == text
        if name
        not in (
            "workers",
            "threads",
            "graceful_timeout",
        )
        else Settings.from_environ({f"FILLMARK_{name.upper()}": "4"})
    )


@pytest.mark.parametrize(
    ("name", "text"),
    [
        ("FILLMARK_PORT", "eighty"),
        ("FILLMARK_PORT", "-1"),
        ("FILLMARK_PORT", "65536"),
        ("FILLMARK_PORT", ""),
        ("FILLMARK_PORT", "1e3"),
        ("FILLMARK_PORT", "9" * 5000),  # more digits than Python turns into a number
        ("FILLMARK_WORKERS", "0"),
        ("FILLMARK_THREADS", "100000"),
        ("FILLMARK_HOST", ""),
        ("FILLMARK_HOST", "two words"),
        ("FILLMARK_WROKERS", "2"),
    ],
)
def test_a_wrong_setting_is_refused_by_name_in_one_line(name, text):
    with pytest.raises(SettingsError, match=name) as refused:
        Settings.from_environ({name: text})
    assert "\n" not in str(refused.value)
