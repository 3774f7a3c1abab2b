"""The calculators' addresses: one request by three methods, its validator, and the same bytes every time."""

import json
from urllib.parse import quote

import orjson
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from near import near

KINDS = ["bulk", "film", "wire", "cylinder", "box", "sphere", "sheet", "line"]
PATHS = ["fermi-level", "density-of-states", "thermal-occupancy"]

ALWAYS = {"energy_zero", "cautions", "provenance", "method", "relative_error_bound"}
LEVEL = {
    "fermi_energy",
    "chemical_potential",
    "lowest_level",
    "chemical_potential_above_lowest_level",
    "fermi_temperature",
    "reduced_temperature",
    "fermi_wavevector",
    "fermi_wavelength",
    "fermi_velocity",
    "wigner_seitz_ratio",
    "regime",
}
OF_CURVES = {"density_of_states_at_fermi_level", "effective_dimension"}
STATES = {"energy", "density_of_states", "integrated_states", "fermi_energy", "chemical_potential", "lowest_level"}
OCCUPANCY = {
    "energy",
    "occupation",
    "thermal_broadening",
    "excited_fraction",
    "mean_energy",
    "transition_width",
    "fermi_energy",
    "chemical_potential",
    "lowest_level",
}


def members(path, kind):
    """Return the members that the contract gives a response for one sample."""
    lines, bulk = kind in ("box", "sphere"), kind == "bulk"
    levels = set() if bulk else {"levels"}
    return (
        ALWAYS
        | {
            "fermi-level": LEVEL | (set() if lines else OF_CURVES) | (set() if bulk else {"occupied_levels"}),
            "density-of-states": STATES | levels,
            "thermal-occupancy": OCCUPANCY | levels | (set() if lines else {"occupied_density"}),
        }[path]
    )


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize("kind", KINDS)
def test_every_member_of_the_contract_is_there_and_no_other(path, kind, post, sample_request):
    answer = post(path, sample_request(kind))
    assert answer.status_code == 200, answer.text
    assert set(answer.json) == members(path, kind)
    assert answer.json["energy_zero"] == "band edge"


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize("kind", KINDS)
def test_one_sample_gives_numbers_and_one_element_arrays_give_arrays(path, kind, post, sample_request):
    one = post(path, sample_request(kind)).json
    many = post(path, sample_request(kind, temperature={"value": [300], "unit": "K"})).json
    assert set(one) - set(many) <= {"levels"}
    for name, member in many.items():
        if name in ("cautions", "provenance", "energy_zero"):
            continue
        single = one[name]
        if isinstance(member, list):
            assert member == [single], name
        else:
            assert isinstance(member["value"], list) and len(member["value"]) == 1
            assert member["unit"] == single["unit"]
            # A batch and a single differ by roundings at most.
            assert member["value"][0] == near(single["value"], rel=1e-13, abs=1e-300), name


@pytest.mark.parametrize("path", PATHS)
def test_post_query_and_get_give_the_same_bytes(path, client, sample_request):
    body = json.dumps(sample_request("film"))
    posted = client.post(f"/v1/{path}", data=body, content_type="application/json")
    queried = client.open(f"/v1/{path}", method="QUERY", data=body, content_type="application/json")
    linked = client.get(f"/v1/{path}?request={quote(body)}")
    assert posted.data == queried.data == linked.data
    assert posted.headers["ETag"] == queried.headers["ETag"] == linked.headers["ETag"]
    for answer in (posted, queried, linked):
        assert answer.headers["Vary"] == "Accept"
        assert answer.content_type == "application/json"
        assert not answer.headers["ETag"].startswith("W/")
    assert "Cache-Control" in queried.headers and "Cache-Control" in linked.headers
    assert "Cache-Control" not in posted.headers


def test_a_known_validator_is_answered_304_by_get_and_query_and_never_by_post(client, sample_request):
    body = json.dumps(sample_request("film"))
    tag = client.post("/v1/fermi-level", data=body, content_type="application/json").headers["ETag"]
    link = f"/v1/fermi-level?request={quote(body)}"
    for known in (tag, f'"other", {tag}', "*", f"W/{tag}"):
        headers = {"If-None-Match": known}
        linked = client.get(link, headers=headers)
        queried = client.open(
            "/v1/fermi-level", method="QUERY", data=body, content_type="application/json", headers=headers
        )
        for answer in (linked, queried):
            assert (answer.status_code, answer.data) == (304, b""), known
            assert answer.headers["ETag"] == tag
    posted = client.post("/v1/fermi-level", data=body, content_type="application/json", headers={"If-None-Match": tag})
    assert posted.status_code == 200
    assert client.get(link, headers={"If-None-Match": '"other"'}).status_code == 200


def test_a_wrong_request_is_refused_whatever_the_caller_knows(client):
    answer = client.get("/v1/fermi-level?request={}", headers={"If-None-Match": "*"})
    assert answer.status_code == 422


def test_head_is_get_without_a_body(client, sample_request):
    answer = client.head(f"/v1/fermi-level?request={quote(json.dumps(sample_request('bulk')))}")
    assert (answer.status_code, answer.data) == (200, b"")
    assert "ETag" in answer.headers


def test_options_says_what_an_address_takes(client):
    answer = client.options("/v1/fermi-level")
    assert (answer.status_code, answer.data) == (200, b"")
    assert {"GET", "POST", "QUERY", "HEAD", "OPTIONS"} == set(answer.headers["Allow"].split(", "))
    # RFC 10008, Accept-Query: what a body of QUERY may be.
    assert answer.headers["Accept-Query"] == "application/json"
    # No body, no type: Flask would call it HTML.
    assert answer.content_type is None
    assert client.options("/v1/units").content_type is None


@given(st.randoms(use_true_random=False))
@settings(max_examples=20, deadline=None)
def test_the_order_of_members_and_the_spelling_of_units_change_nothing(app, shuffle):
    from web_requests import film_in_other_words

    client = app.test_client()
    first = client.post("/v1/fermi-level", json=film_in_other_words(None))
    other = client.post("/v1/fermi-level", json=film_in_other_words(shuffle))
    assert other.data == first.data


@pytest.mark.parametrize(
    ("length", "density"),
    [
        ({"value": 2e-6, "unit": "cm"}, {"value": 2e25, "unit": "m^-3"}),
        ({"value": 200, "unit": "angstrom"}, {"value": 2e7, "unit": "um^-3"}),
        ({"value": 2e-8, "unit": "m"}, {"value": 0.02, "unit": "nm^-3"}),
    ],
)
def test_other_units_in_give_the_same_out(length, density, post, sample_request):
    expected = post("fermi-level", sample_request("film")).json
    request = sample_request("film", geometry={"kind": "film", "thickness": length}, carrier_density=density)
    got = post("fermi-level", request).json
    for name, member in expected.items():
        if isinstance(member, dict) and "value" in member:
            # Each conversion rounds once or twice.
            assert got[name]["value"] == near(member["value"], rel=1e-14), name


def test_output_units_are_those_asked_for_and_si_is_si(post, sample_request):
    laboratory = post("fermi-level", sample_request("film")).json
    chosen = post("fermi-level", sample_request("film", output_units={"fermi_energy": "meV"})).json
    assert chosen["fermi_energy"]["unit"] == "meV"
    assert chosen["fermi_energy"]["value"] == near(1e3 * laboratory["fermi_energy"]["value"], rel=1e-15)
    assert chosen["lowest_level"] == laboratory["lowest_level"]
    si = post("fermi-level", sample_request("film", output_units="SI")).json
    assert {si[name]["unit"] for name in ("fermi_energy", "fermi_velocity", "fermi_wavelength")} == {"J", "m/s", "m"}
    assert si["fermi_energy"]["value"] == near(laboratory["fermi_energy"]["value"] * 1.602176634e-19, rel=4e-16)


def test_arrays_are_paired_and_a_grid_is_crossed_in_c_order(post, sample_request):
    density = {"value": [1e18, 1e19, 1e20], "unit": "cm^-3"}
    temperature = {"value": [4.2, 300], "unit": "K"}
    crossed = post(
        "fermi-level", sample_request("bulk", carrier_density=density, temperature=temperature, combine="grid")
    ).json
    assert crossed["grid"] == {"axes": ["carrier_density", "temperature"], "shape": [3, 2]}
    place = 0
    for one_density in density["value"]:
        for one_temperature in temperature["value"]:
            alone = post(
                "fermi-level",
                sample_request(
                    "bulk",
                    carrier_density={"value": one_density, "unit": "cm^-3"},
                    temperature={"value": one_temperature, "unit": "K"},
                ),
            ).json
            for name in ("chemical_potential", "fermi_energy", "reduced_temperature"):
                assert crossed[name]["value"][place] == near(alone[name]["value"], rel=1e-14)
            place += 1
    refused = post("fermi-level", sample_request("bulk", carrier_density=density, temperature=temperature))
    assert refused.status_code == 422


def test_invalid_rows_are_refused_or_left_out_with_their_reason(post, sample_request):
    temperature = {"value": [300, -1, 77], "unit": "K"}
    refused = post("fermi-level", sample_request("bulk", temperature=temperature))
    assert refused.status_code == 422
    assert [fault["pointer"] for fault in refused.json["errors"]] == ["#/temperature/value/1"]
    kept = post("fermi-level", sample_request("bulk", temperature=temperature, invalid_rows="omit")).json
    assert kept["row"] == [0, 2]
    assert [(one["row"], one["pointer"]) for one in kept["omitted"]] == [(1, "#/temperature/value/1")]
    assert len(kept["fermi_energy"]["value"]) == 2


def test_a_sample_without_an_answer_is_left_out_like_an_invalid_one(post, sample_request):
    request = sample_request("box", temperature={"value": [300, 0, 77], "unit": "K"})
    refused = post("density-of-states", request)
    assert refused.status_code == 422
    assert "row 1" in refused.json["errors"][0]["detail"]
    kept = post("density-of-states", {**request, "invalid_rows": "omit"}).json
    assert kept["row"] == [0, 2]
    assert kept["omitted"][0]["row"] == 1
    assert len(kept["energy"]["value"]) == 2


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize("kind", KINDS)
def test_nothing_that_leaves_is_null_in_an_array_or_not_finite(path, kind, post, sample_request):
    text = post(path, sample_request(kind, temperature={"value": [0.001, 4.2, 1e5], "unit": "K"})).data
    assert b"null" not in text
    assert b"NaN" not in text and b"Infinity" not in text
    orjson.loads(text)


def test_what_is_enormous_is_refused_with_the_limit_and_what_would_fit(post, sample_request):
    huge = sample_request(
        "box", geometry={"kind": "box", **{n: {"value": 5, "unit": "um"} for n in ("length", "width", "height")}}
    )
    refused = post("fermi-level", huge)
    assert refused.status_code == 422
    assert refused.json["type"] == "/problems/too-large"
    assert "limit" in refused.json["detail"] and "fit" in refused.json["detail"]
    points = {"from": {"value": 0, "unit": "eV"}, "to": {"value": 1, "unit": "eV"}, "points": 100_001}
    refused = post("density-of-states", sample_request("film", energies=points))
    assert refused.status_code == 422
    assert "100000" in refused.json["errors"][0]["detail"]


@pytest.mark.parametrize(
    ("change", "pointer"),
    [
        ({"temprature": {"value": 1, "unit": "K"}}, "#/temprature"),
        ({"temperature": {"value": 300, "unit": "eV"}}, "#/temperature/unit"),
        ({"temperature": {"value": True, "unit": "K"}}, "#/temperature/value"),
        ({"temperature": {"value": "300", "unit": "K"}}, "#/temperature/value"),
        ({"temperature": {"value": 300, "unit": "K", "uncertainty": 1}}, "#/temperature/uncertainty"),
        ({"material": "copper"}, "#/material"),
        ({"propagation": {"kind": "monte-carlo"}}, "#/propagation"),
        ({"band": {"nonparabolicity": {"value": 0.5, "unit": "eV^-1"}}}, "#/band/nonparabolicity/value"),
        ({"band": {"valleys": [{"effective_mass": 1, "count": 2}]}}, "#/band/valleys"),
        ({"carrier_density": {"value": 1e12, "unit": "cm^-1"}}, "#/carrier_density/unit"),
        ({"output_units": {"fermi_energy": "nm"}}, "#/output_units/fermi_energy"),
    ],
)
def test_what_is_wrong_or_comes_later_is_refused_where_it_stands(change, pointer, post, sample_request):
    refused = post("fermi-level", sample_request("film", **change))
    assert refused.status_code == 422, refused.text
    assert pointer in [fault["pointer"] for fault in refused.json["errors"]]


def test_all_faults_are_told_at_once(post):
    refused = post("fermi-level", {"temperature": {"value": "x", "unit": "q"}, "geometry": {"kind": "flim"}, "a": 1})
    assert {fault["pointer"] for fault in refused.json["errors"]} >= {
        "#/carrier_density",
        "#/temperature/value",
        "#/temperature/unit",
        "#/geometry/kind",
        "#/a",
    }


def test_provenance_names_service_constants_models_and_the_requests_hash(post, sample_request):
    first = post("fermi-level", sample_request("film")).json["provenance"]
    assert first["service"] == "fillmark" and first["constants"] == "CODATA 2022"
    assert "infinite potential walls" in first["models"]
    other = post("fermi-level", sample_request("film", temperature={"value": 299, "unit": "K"})).json["provenance"]
    assert first["request_sha256"] != other["request_sha256"]
