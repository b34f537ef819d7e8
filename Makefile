# SPDX-License-Identifier: GPL-3.0-or-later
# luxgale: `make demo` shows the main job, `make check` runs every test; both install what they need on Debian.

VERSION   := 0.1.0
BUILD     ?= build
CC        ?= gcc
OPT       ?= -O2
PKGS      := gsl yaml-0.1
TEST_PKGS := check
WARN      := -Wall -Wextra -Wshadow -Wconversion -Wstrict-prototypes -Wmissing-prototypes -Werror
CFLAGS_   := -std=c11 -D_POSIX_C_SOURCE=200809L $(OPT) -g -fPIC -fvisibility=hidden -ffp-contract=off $(WARN) \
             -Iinclude -Isrc -DLXG_VERSION='"$(VERSION)"' -pthread
PKG_CFLAGS  = $(shell pkg-config --cflags $(PKGS))
PKG_LIBS    = $(shell pkg-config --libs $(PKGS))
TEST_CFLAGS = $(shell pkg-config --cflags $(TEST_PKGS))
TEST_LIBS   = $(shell pkg-config --libs $(TEST_PKGS))
PYTHON    ?= /usr/bin/python3

LIB_SRC   := $(filter-out src/cli/%,$(sort $(wildcard src/*.c src/*/*.c)))
CLI_SRC   := $(sort $(wildcard src/cli/*.c))
TEST_SRC  := $(sort $(wildcard tests/test_*.c))
SUPPORT_SRC := $(sort $(wildcard tests/support/*.c))
SUITES    := $(TEST_SRC:tests/test_%.c=%)
LIB_OBJ   := $(LIB_SRC:%.c=$(BUILD)/%.o)
CLI_OBJ   := $(CLI_SRC:%.c=$(BUILD)/%.o)
TEST_OBJ  := $(TEST_SRC:%.c=$(BUILD)/%.o) $(SUPPORT_SRC:%.c=$(BUILD)/%.o)
LIB       := $(BUILD)/libluxgale.a

JOBS      ?= 2

# Suites that run again under the address and undefined-behaviour sanitizers; the others are too slow for that.
SLOW      ?= wind family
QUICK      = $(filter-out $(SLOW),$(SUITES))

.PHONY: all tests programs clean format format-check check-layers check-symbols
.PHONY: demo check check-cli check-python check-clang check-sanitizers check-units docs
all: $(BUILD)/luxgale $(LIB)

$(BUILD)/%.o: %.c
	@mkdir -p $(@D)
	$(CC) $(CFLAGS_) $(CFLAGS) $(PKG_CFLAGS) $(if $(filter tests/%,$<),$(TEST_CFLAGS) -Itests) -MMD -MP -c -o $@ $<

$(LIB): $(LIB_OBJ)
	rm -f $@
	ar rcs $@ $^

$(BUILD)/luxgale: $(CLI_OBJ) $(LIB)
	$(CC) $(OPT) -g -pthread $(LDFLAGS) -o $@ $^ $(PKG_LIBS) -lm

# The runner: one suite a file, collected by name; `build/run-tests NAME...` runs some of them.
$(BUILD)/tests/suites.h: $(TEST_SRC)
	@mkdir -p $(@D)
	@{ for s in $(SUITES); do echo "SUITE($$s)"; done; } > $@

$(BUILD)/tests/run_all.o: tests/run_all.c $(BUILD)/tests/suites.h
	$(CC) $(CFLAGS_) $(CFLAGS) $(PKG_CFLAGS) $(TEST_CFLAGS) -Itests -I$(BUILD)/tests -MMD -MP -c -o $@ $<

$(BUILD)/run-tests: $(TEST_OBJ) $(BUILD)/tests/run_all.o $(LIB)
	$(CC) $(OPT) -g -pthread $(LDFLAGS) -o $@ $^ $(PKG_LIBS) $(TEST_LIBS) -lm

tests: $(BUILD)/run-tests

# Programs beside the suites: micro-benchmarks and calibrations, one file each (`make programs`).
PROGRAMS := $(patsubst %.c,$(BUILD)/%,$(sort $(wildcard tests/bench/*.c tests/calibration/*.c)))
programs: $(PROGRAMS)
$(PROGRAMS): %: %.o $(LIB)
	$(CC) $(OPT) -g -pthread $(LDFLAGS) -o $@ $^ $(PKG_LIBS) -lm

# Speed: medians, ratios against SciPy in the same run, instruction counts (the figures of docs/performance.md).
bench: $(BUILD)/luxgale programs
	$(PYTHON) tests/bench/twin_scipy.py $(BUILD)/luxgale $(BUILD)/tests/bench/bench_wind
	@for what in cold follow family; do printf 'instructions, %s: ' $$what; \
	  valgrind --tool=callgrind --callgrind-out-file=/dev/null $(BUILD)/tests/bench/bench_wind count $$what 2>&1 | \
	  sed -n 's/.*Collected : //p'; done
	$(BUILD)/tests/bench/bench_opacity

format:
	clang-format -i $(shell git ls-files '*.c' '*.h')

format-check:
	clang-format --dry-run --Werror $(shell git ls-files '*.c' '*.h')

check-layers:
	@.ci/check-layers

check-symbols: $(LIB)
	@.ci/check-symbols $(LIB)

check-cli: $(BUILD)/luxgale
	@tests/cli/run $(BUILD)/luxgale

check-python: $(BUILD)/luxgale
	@$(PYTHON) tests/python/check_outputs.py $(BUILD)/luxgale
	@$(PYTHON) tests/python/readme.py $(BUILD)/luxgale

check-clang:
	@$(MAKE) --no-print-directory -s -j$(JOBS) CC=clang OPT=-O0 BUILD=build-clang all tests

check-sanitizers:
	@$(MAKE) --no-print-directory -s -j$(JOBS) OPT='-O1 -fsanitize=address,undefined -fno-sanitize-recover=undefined' \
	  BUILD=build-sanitize all tests
	@for suite in $(QUICK); do CK_FORK=no build-sanitize/run-tests $$suite || exit 1; done
	@tests/cli/run build-sanitize/luxgale wrong-input options

check-units: tests
	$(BUILD)/run-tests

# Everything, the unit tests last: their summary ends the output.
check:
	@.ci/need check
	@$(MAKE) --no-print-directory -s -j$(JOBS) all tests
	@$(MAKE) --no-print-directory format-check check-layers check-symbols check-clang check-sanitizers check-cli check-python
	@$(MAKE) --no-print-directory scorecard-quick
	@$(MAKE) --no-print-directory check-units

demo:
	@.ci/need demo
	@$(MAKE) --no-print-directory -s -j$(JOBS) all
	@examples/demo.sh $(BUILD)/luxgale demo-output

docs: $(BUILD)/luxgale
	@mkdir -p docs
	$(BUILD)/luxgale help case.md > docs/inputs.md

clean:
	rm -rf $(BUILD) build-clang build-sanitize build-fuzz build-thread build-coverage build-mutation demo-output

include tests/reliability/reliability.mk

-include $(LIB_OBJ:.o=.d) $(CLI_OBJ:.o=.d) $(TEST_OBJ:.o=.d) $(PROGRAMS:=.d)
