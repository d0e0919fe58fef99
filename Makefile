# Works on a machine with only Python 3.11+ and make. `make help` lists what there is.
PYTHON ?= python3
VENV := .venv
BIN := $(VENV)/bin
ONLY ?=

.DEFAULT_GOAL := help
.PHONY: help demo serve test lint types bench faults browser clean

help: ## list the commands
	@grep -hE '^[a-z]+:.*## ' $(MAKEFILE_LIST) | sed -E 's/^([a-z]+):[^#]*## (.*)/  make \1\t\2/' | expand -t 16

demo: $(VENV)/.runs ## load the invented survey, serve it, print the ways in
	@$(BIN)/ergbook demo

serve: $(VENV)/.runs ## serve your own surveys
	@$(BIN)/ergbook serve

test: $(VENV)/.tests lint types browser ## lint, types and every test
	$(BIN)/python -m pytest

lint: $(VENV)/.tests ## style and import rules
	$(BIN)/ruff check
	$(BIN)/lint-imports
	$(BIN)/python -m fieldlog.sheet.generate --check

types: $(VENV)/.tests tests/js/node_modules/.done ## types of Python and JavaScript
	$(BIN)/mypy
	$(BIN)/python tests/js/run.py tsc -p tests/js/tsconfig.json
	$(BIN)/python tests/js/run.py tsc -p tests/js/tsconfig.worker.json

bench: $(VENV)/.tests browser ## measure; writes bench.json (ONLY=group for one group)
	$(BIN)/python -m tests.bench $(ONLY)

faults: $(VENV)/.tests browser ## random schedules of every fault, the long form (about half an hour)
	$(BIN)/python -m tests.faults

browser: $(VENV)/.tests
	@$(BIN)/python tests/browser/find.py --install

clean: ## remove what the other commands made, except your data
	rm -rf $(VENV) tests/js/node_modules .mypy_cache .ruff_cache .pytest_cache .hypothesis bench.json

$(VENV)/.made:
	@$(PYTHON) -c 'import sys; sys.exit(sys.version_info < (3, 11))' || { echo "Ergbook needs Python 3.11 or newer: make PYTHON=python3.12 ..." >&2; exit 1; }
	@$(PYTHON) -m venv $(VENV) || { rm -rf $(VENV); echo "Python cannot make a virtual environment here. On Debian: apt-get install python3-venv" >&2; exit 1; }
	@$(BIN)/python -m pip install --quiet --upgrade pip
	@touch $@

$(VENV)/.runs: $(VENV)/.made pyproject.toml
	@test -e $(VENV)/.tests || echo "Setting up (once, about a minute) ..."
	@$(BIN)/python -m pip install --quiet -e .
	@touch $@

$(VENV)/.tests: $(VENV)/.made pyproject.toml
	$(BIN)/python -m pip install --quiet -e '.[dev]'
	@touch $@ $(VENV)/.runs

tests/js/node_modules/.done: tests/js/package.json tests/js/package-lock.json $(VENV)/.tests
	$(BIN)/python tests/js/run.py npm ci
	@touch $@
