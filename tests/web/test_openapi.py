"""The OpenAPI document: valid, whole, and its examples answered as it says."""

import jsonschema
import pytest
from openapi_spec_validator import OpenAPIV31SpecValidator

from service.web.endpoints import ENDPOINTS


@pytest.fixture(scope="module")
def document(app):
    return app.test_client().get("/openapi.json").json


def test_the_document_is_valid_openapi_3_1(document):
    assert document["openapi"] == "3.1.0"
    OpenAPIV31SpecValidator(document).validate()


def test_every_endpoint_has_a_worked_example_by_post_and_by_link(document):
    for endpoint in ENDPOINTS:
        operations = document["paths"][f"/v1/{endpoint.name}"]
        assert operations["post"]["requestBody"]["content"]["application/json"]["examples"]
        assert operations["get"]["parameters"][0]["content"]["application/json"]["examples"]


def test_the_geometry_is_told_apart_by_its_kind(document):
    text = str(document["components"]["schemas"])
    assert "'discriminator': {'propertyName': 'kind'" in text


def test_every_example_is_answered_as_its_schema_says(document, client):
    registry = {"components": document["components"]}
    for endpoint in ENDPOINTS:
        content = document["paths"][f"/v1/{endpoint.name}"]["post"]["requestBody"]["content"]["application/json"]
        for example in content["examples"].values():
            answer = client.post(f"/v1/{endpoint.name}", json=example["value"])
            assert answer.status_code == 200, answer.text
            schema = {"$ref": f"#/components/schemas/{type(endpoint.result).__name__}", **registry}
            jsonschema.Draft202012Validator(schema).validate(answer.json)
