# SPDX-License-Identifier: GPL-3.0-or-later
# luxgale: `make demo` shows the main job, `make check` runs every test; both install what they need on Debian.

VERSION   := 0.1.0
BUILD     ?= build
CC        ?= gcc
OPT       ?= -O2
PKGS      := gsl yaml-0.1 libcjson
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

.PHONY: all tests programs clean format format-check check-layers check-symbols
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

format:
	clang-format -i $(shell git ls-files '*.c' '*.h')

format-check:
	clang-format --dry-run --Werror $(shell git ls-files '*.c' '*.h')

check-layers:
	@.ci/check-layers

check-symbols: $(LIB)
	@.ci/check-symbols $(LIB)

clean:
	rm -rf $(BUILD)

-include $(LIB_OBJ:.o=.d) $(CLI_OBJ:.o=.d) $(TEST_OBJ:.o=.d) $(PROGRAMS:=.d)
