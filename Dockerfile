# The image of fillmark: `docker build -t fillmark . && docker run --rm -p 127.0.0.1:8000:8000 fillmark`
# Any base with Python 3.11 to 3.13 will do. pip takes its settings from the build's environment.
ARG BASE=docker.io/library/python:3.13-slim

FROM ${BASE} AS build
ENV PIP_DISABLE_PIP_VERSION_CHECK=1 PIP_NO_CACHE_DIR=1 PIP_NO_INPUT=1
WORKDIR /src
# Two environments: one builds and installs, the other, without pip, is all that the image keeps.
RUN python3 -m venv /opt/build && python3 -m venv --without-pip /opt/venv
COPY service/deploy/build-requirements.txt service/deploy/requirements.txt ./service/deploy/
RUN /opt/build/bin/pip install --require-hashes --only-binary :all: --requirement service/deploy/build-requirements.txt \
    && /opt/build/bin/pip --python /opt/venv/bin/python install \
        --require-hashes --only-binary :all: --requirement service/deploy/requirements.txt
COPY pyproject.toml README.md ./
COPY schemas schemas
COPY service service
RUN /opt/build/bin/pip wheel --no-deps --no-build-isolation --wheel-dir /dist . \
    && /opt/build/bin/pip --python /opt/venv/bin/python install --no-deps --no-index /dist/fillmark-*.whl \
    && /opt/build/bin/pip --python /opt/venv/bin/python check

FROM ${BASE}
ARG VERSION=0.1.0
ARG REVISION=unknown
LABEL org.opencontainers.image.title="fillmark" \
      org.opencontainers.image.description="REST service for the electron gas: Fermi level, density of states and thermal occupancy of real conductors" \
      org.opencontainers.image.version="${VERSION}" \
      org.opencontainers.image.revision="${REVISION}"
COPY --from=build /opt/venv /opt/venv
# Written nowhere at run time: the root may be read-only, and no home folder is needed.
ENV PATH=/opt/venv/bin:$PATH \
    PYTHONDONTWRITEBYTECODE=1 \
    PYTHONUNBUFFERED=1 \
    FILLMARK_HOST=0.0.0.0 \
    FILLMARK_PORT=8000
# A number, so that an orchestrator can see that it is not root.
USER 10001:10001
WORKDIR /
EXPOSE 8000
STOPSIGNAL SIGTERM
# Liveness, since an orchestrator replaces what is unhealthy; readiness is false while a container drains.
HEALTHCHECK --interval=10s --timeout=3s --start-period=10s --retries=3 \
    CMD ["python", "-I", "-c", "import http.client, os, sys; c = http.client.HTTPConnection('127.0.0.1', int(os.environ['FILLMARK_PORT']), timeout=2); c.request('GET', '/livez'); sys.exit(c.getresponse().status != 200)"]
ENTRYPOINT ["fillmark"]
CMD ["serve"]
