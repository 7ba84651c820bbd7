# Two commands: make run, make test. They work from any directory (make -C), twice in a row, and after a crash.
ROOT := $(dir $(abspath $(lastword $(MAKEFILE_LIST))))
VENV := $(ROOT).venv
PY := $(VENV)/bin/python
PYTHON ?= $(firstword $(foreach name,python3.11 python3.12 python3.13 python3.14 python3,$(shell command -v $(name) 2>/dev/null)))
DATA_DIR ?= $(ROOT).lab
.PHONY: run test lint clean-data
.DEFAULT_GOAL := run

run: $(VENV)/.ready
	@cd $(ROOT) && DATA_DIR="$(DATA_DIR)" exec $(PY) -m labrecords.supervisor

test: $(VENV)/.ready
	@cd $(ROOT) && exec $(PY) -m pytest $(ARGS)

lint: $(VENV)/.ready
	@cd $(ROOT) && $(PY) -m ruff check . && $(PY) -m ruff format --check . && $(VENV)/bin/lint-imports && $(PY) -m mypy

clean-data:
	@cd $(ROOT) && $(PY) -m labrecords.clean_data "$(DATA_DIR)" $(if $(filter 1,$(YES)),--yes)

$(VENV)/.ready: $(ROOT)requirements.lock $(ROOT)uv.txt
	@test -n "$(PYTHON)" || { echo "No python3 was found. Install Python 3.11 or newer."; exit 1; }
	@$(PYTHON) -c 'import sys; sys.exit(sys.version_info < (3, 11))' || { echo "$(PYTHON) is older than 3.11. Install Python 3.11 or newer, or say which: make PYTHON=/path/to/python3"; exit 1; }
	@$(PYTHON) -c 'import ensurepip, venv' 2>/dev/null || { echo "$(PYTHON) cannot make environments. Install its venv package (on Debian: python3-venv)."; exit 1; }
	@echo "installing into .venv (first time only)"
	@test -x $(PY) || $(PYTHON) -m venv $(VENV)
	@$(PY) -m pip install -q --disable-pip-version-check --require-hashes -r $(ROOT)uv.txt
	@$(VENV)/bin/uv pip sync -q --python $(PY) --require-hashes $(ROOT)requirements.lock $(ROOT)uv.txt
	@touch $@
