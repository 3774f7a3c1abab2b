"""Accept as clients write it (RFC 9110, section 12.5.1): q-values, the most specific range first, parameters."""

import pytest


@pytest.mark.parametrize(
    ("accept", "status"),
    [
        # What common clients send by default or by habit.
        ("application/json; charset=utf-8", 200),
        ("application/json;charset=UTF-8", 200),
        ("application/json, text/plain, */*", 200),
        ("text/html,application/xhtml+xml,application/xml;q=0.9,*/*;q=0.8", 200),
        ("application/problem+json, application/json", 200),
        ("APPLICATION/JSON", 200),
        # The most specific range decides, wherever it stands.
        ("application/json;q=0, */*", 406),
        ("*/*, application/json;q=0", 406),
        ("application/*;q=0, */*", 406),
        ("*/*;q=0, application/json;q=0.001", 200),
        ("application/*;q=0, application/json; charset=utf-8", 200),
        ("*/*;q=0", 406),
        # No range that can be read is no wish.
        (", ,", 200),
        ("application/json;q=much", 200),
        ("json", 406),
    ],
)
def test_the_most_specific_range_decides_and_parameters_do_not(accept, status, client, sample_request):
    answer = client.post("/v1/fermi-level", json=sample_request("bulk"), headers={"Accept": accept})
    assert answer.status_code == status
    assert answer.headers["Vary"] == "Accept"
