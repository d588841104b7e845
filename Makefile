# Two commands, on a machine with cargo, Python 3.11, make and gcc:
#   make demo   set up what is missing, then show the demonstration
#   make test   set up what is missing, then run every test
# Others: bench, stub (rewrite _core.pyi), lock (pin the requirements again), lint, clean.

PY ?= python3.11
UV ?= uv
LOCKFLAGS ?=

VENV := .venv
BIN := $(VENV)/bin
REQ := python/requirements

# maturin builds for the environment named here; with a second one named it refuses.
export VIRTUAL_ENV := $(CURDIR)/$(VENV)
unexport CONDA_PREFIX
export PIP_DISABLE_PIP_VERSION_CHECK := 1

# Stamps: a file here says that the step is done and newer than what it depends on.
MADE := $(VENV)/.made
DEMO := $(VENV)/.demo
TEST := $(VENV)/.test
BUILT := $(VENV)/.built
BUILD_LOG := $(VENV)/build.log

SOURCES := Cargo.toml Cargo.lock pyproject.toml $(shell find crates -name '*.rs' -o -name '*.toml')

# Wheels only: building a package from source would fetch unpinned build tools.
INSTALL := $(BIN)/python -m pip install --quiet --require-hashes --only-binary :all:
DEVELOP := $(BIN)/maturin develop --release --locked
COMPILE := $(UV) pip compile --quiet --universal --python-version 3.11 --generate-hashes --no-annotate \
	--no-emit-index-url --no-emit-find-links --custom-compile-command 'make lock' $(LOCKFLAGS)

STUB := python/ridemodes/_core.pyi
GENERATE_STUB = $(DEVELOP) --generate-stubs >$(BUILD_LOG) 2>&1 || { cat $(BUILD_LOG) >&2; exit 1; }; \
	$(BIN)/python python/stub_imports.py $(STUB)

.PHONY: demo test bench stub lock lint clean fuzz
.NOTPARALLEL:
.DELETE_ON_ERROR:

demo: $(BUILT)
	@$(BIN)/python -m ridemodes demo

test: $(BUILT) $(TEST)
	@echo 'Rust: unit, integration and documentation tests'
	@cargo test --locked --release --quiet
	@echo 'Python: tests and the examples in docstrings'
	@MPLBACKEND=agg $(BIN)/python -m pytest --quiet
	@echo 'Python: notebooks'
	@$(BIN)/python -m pytest --quiet --nbmake notebooks
	@echo 'Python: types'
	@$(BIN)/python -m mypy --strict python/ridemodes
	@echo 'Python: stub against the built extension and as generated'
	@$(BIN)/python -m mypy.stubtest --mypy-config-file pyproject.toml ridemodes._core
	@cp $(STUB) $(VENV)/committed.pyi
	@$(GENERATE_STUB)
	@cmp -s $(STUB) $(VENV)/committed.pyi || { echo 'The stub has changed: run make stub and commit it' >&2; exit 1; }

bench: $(BUILT)
	@echo 'Rust: benchmarks'
	@cargo bench --locked --quiet -p ridemodes --bench stages
	@echo 'Python: benchmarks'
	@$(BIN)/python python/benches/speed.py

# A long campaign on the solver of the operating point, some ten minutes.
fuzz:
	@echo 'Rust: 100,000 random vehicles and conditions'
	@FUZZ=100000 cargo test --locked --release --quiet any_condition

stub: $(DEMO)
	@echo 'Rewriting python/ridemodes/_core.pyi'
	@$(GENERATE_STUB)
	@touch $(BUILT)

# For maintainers, with uv installed. `make lock LOCKFLAGS=--upgrade` takes the newest versions.
lock:
	@echo 'Pinning the requirements'
	@$(COMPILE) $(REQ)/demo.in --output-file $(REQ)/demo.lock
	@$(COMPILE) $(REQ)/test.in --constraints $(REQ)/demo.lock --output-file $(REQ)/test.lock

lint: $(TEST)
	@echo 'Rust: format'
	@cargo fmt --all --check
	@echo 'Rust: clippy'
	@cargo clippy --release --locked --quiet --workspace --all-targets -- -D warnings
	@echo 'Python: format'
	@$(BIN)/ruff format --check --quiet
	@echo 'Python: lints'
	@$(BIN)/ruff check --quiet

clean:
	@echo 'Removing what was built'
	@rm -rf $(VENV) target dist .mypy_cache .pytest_cache .ruff_cache .hypothesis
	@rm -f python/ridemodes/*.so python/ridemodes/*.pyd
	@find python tests notebooks -name __pycache__ -type d -prune -exec rm -rf {} +

$(MADE):
	@echo 'Making the Python environment in $(VENV)'
	@$(PY) -m venv --clear $(VENV)
	@touch $@

$(DEMO): $(REQ)/demo.lock $(MADE)
	@echo 'Installing the pinned requirements'
	@$(INSTALL) -r $<
	@touch $@

$(TEST): $(REQ)/test.lock $(MADE)
	@echo 'Installing the pinned requirements of the tests'
	@$(INSTALL) -r $<
	@touch $@

$(BUILT): $(SOURCES) $(DEMO)
	@echo 'Building the extension (some minutes the first time)'
	@$(DEVELOP) >$(BUILD_LOG) 2>&1 || { cat $(BUILD_LOG) >&2; exit 1; }
	@touch $@
