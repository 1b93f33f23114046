# One image for every part of the service: web, worker, clock, and every command.
FROM python:3.11-slim AS build
WORKDIR /src
COPY pyproject.toml README.md LICENSE ./
COPY .ci/constraints.txt ./constraints.txt
COPY governance ./governance
COPY ledger ./ledger
RUN python -m venv /opt/stintbook \
    && /opt/stintbook/bin/pip install --no-cache-dir -c constraints.txt ".[production]"
# The program is installed twice otherwise: it runs from /srv, beside its manage.py.
RUN /opt/stintbook/bin/pip uninstall --yes stintbook

FROM python:3.11-slim
LABEL org.opencontainers.image.title="Stintbook" \
      org.opencontainers.image.description="Keeps the book of a commons" \
      org.opencontainers.image.licenses="Apache-2.0"
RUN groupadd --gid 10001 stintbook \
    && useradd --uid 10001 --gid 10001 --no-create-home --home-dir /nonexistent \
       --shell /usr/sbin/nologin stintbook \
    && mkdir -p /var/lib/stintbook/output /srv/static \
    && chown -R stintbook:stintbook /var/lib/stintbook
COPY --from=build /opt/stintbook /opt/stintbook
WORKDIR /srv/stintbook
COPY manage.py LICENSE ./
COPY governance ./governance
COPY ledger ./ledger
COPY fixtures ./fixtures
# Nothing is written beside the program: the root may be read-only, with /tmp in memory.
ENV PATH=/opt/stintbook/bin:$PATH \
    PYTHONDONTWRITEBYTECODE=1 \
    PYTHONUNBUFFERED=1 \
    MPLCONFIGDIR=/tmp/matplotlib \
    STINTBOOK_STATIC=/srv/static \
    STINTBOOK_OUTPUT=/var/lib/stintbook/output
RUN python -m compileall -q ledger governance \
    && python manage.py collectstatic --noinput -v 0
USER 10001:10001
VOLUME /var/lib/stintbook
EXPOSE 8000
STOPSIGNAL SIGTERM
CMD ["gunicorn", "ledger.wsgi:application", \
     "--bind", "0.0.0.0:8000", "--worker-class", "gthread", "--workers", "2", "--threads", "4", \
     "--graceful-timeout", "30", "--timeout", "60", "--max-requests", "10000", \
     "--max-requests-jitter", "1000", "--worker-tmp-dir", "/dev/shm", "--no-control-socket", \
     "--log-level", "warning"]
