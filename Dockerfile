# One image for the site, the worker, the schedule and the migrations: only the command differs.
FROM python:3.11-slim AS environment
WORKDIR /lab
COPY requirements.lock uv.txt ./
RUN python -m venv /env \
 && /env/bin/python -m pip install --no-cache-dir --disable-pip-version-check --require-hashes -r uv.txt \
 && /env/bin/uv pip install --no-cache --python /env/bin/python --require-hashes -r requirements.lock \
 && /env/bin/uv pip uninstall --python /env/bin/python uv

FROM python:3.11-slim
# The account the programs run as: it owns the data folder and nothing else.
RUN useradd --system --uid 10001 --home-dir /data --shell /usr/sbin/nologin lab \
 && install -d -o lab -g lab -m 0750 /data
ENV PATH=/env/bin:$PATH \
    PYTHONUNBUFFERED=1 \
    PYTHONDONTWRITEBYTECODE=1 \
    OMP_NUM_THREADS=1 \
    OPENBLAS_NUM_THREADS=1 \
    DATA_DIR=/data \
    STATIC_DIR=/lab/collected
WORKDIR /lab
COPY --from=environment /env /env
COPY . .
# Collecting files needs settings that can be read, no database and no secret.
RUN LAB_DEBUG=1 LAB_HASHED_STATIC=1 DATABASE_URL=postgres://nobody@nowhere/none \
    python manage.py collectstatic --noinput -v0
USER lab
VOLUME /data
EXPOSE 8000
HEALTHCHECK --interval=30s --timeout=10s --start-period=30s --retries=3 \
    CMD ["python", "manage.py", "check_health", "web"]
CMD ["gunicorn", "labrecords.wsgi", "-b", "0.0.0.0:8000", "-w", "2", "--threads", "4", "--no-control-socket"]
