"""HTTP: the only room that knows both the schemas and the calculators."""
