# Two commands: make run, make test. They work from any directory (make -C), twice in a row, and after a crash.
VENV := .venv
PY := $(VENV)/bin/python
PYTHON ?= $(firstword $(foreach name,python3 python3.14 python3.13 python3.12 python3.11,$(shell \
	$(name) -c 'import sys; sys.exit(sys.version_info < (3, 11))' 2>/dev/null && command -v $(name))))
DATA_DIR ?= $(CURDIR)/.lab
# Tools that read the settings without a database: none is opened.
READS_SETTINGS := LAB_DEBUG=1 DATABASE_URL=postgres://nobody@nowhere/none

.PHONY: run test lint clean-data lock
.DEFAULT_GOAL := run

run: $(VENV)/.ready
	@DATA_DIR="$(DATA_DIR)" exec $(PY) -m labrecords.supervisor

test: $(VENV)/.ready
	@exec $(PY) -m pytest $(ARGS)

lint: $(VENV)/.ready
	@$(PY) -m ruff check .
	@$(PY) -m ruff format --check .
	@$(PY) -c "from importlinter.cli import lint_imports_command as main; main()" --no-cache
	@$(READS_SETTINGS) $(PY) -m mypy

clean-data: $(VENV)/.ready
	@$(PY) -m labrecords.clean_data "$(DATA_DIR)" $(if $(filter 1,$(YES)),--yes)

# After a change of dependencies in pyproject.toml. Names and hashes only: valid for every platform and index.
lock: $(VENV)/.ready
	@$(VENV)/bin/uv pip compile -q --universal --python-version 3.11 --generate-hashes \
		--no-header --no-annotate --group dev -o requirements.lock pyproject.toml

$(VENV)/.ready: requirements.lock uv.txt
	@test -n "$(PYTHON)" || { echo "No Python 3.11 or newer was found. Install one (on Debian: python3 and" \
		"python3-venv), or say where it is: make PYTHON=/path/to/python3"; exit 1; }
	@"$(PYTHON)" -c 'import sys; sys.exit(sys.version_info < (3, 11))' || { echo "$(PYTHON) is older than 3.11." \
		"Install a newer one, or say where it is: make PYTHON=/path/to/python3"; exit 1; }
	@"$(PYTHON)" -c 'import ensurepip, venv' 2>/dev/null || { echo "$(PYTHON) cannot make environments." \
		"Install its venv package (on Debian: apt-get install python3-venv)."; exit 1; }
	@test -x $(PY) && $(PY) -m pip --version >/dev/null 2>&1 || { echo "making the environment .venv"; \
		rm -rf $(VENV); "$(PYTHON)" -m venv $(VENV); }
	@echo "installing the packages of requirements.lock into .venv (first time, and after changes)"
	@$(PY) -m pip install -q --disable-pip-version-check --require-hashes -r uv.txt
	@$(VENV)/bin/uv pip sync --no-progress --python $(PY) --require-hashes requirements.lock uv.txt
	@touch $@
