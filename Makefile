# SPDX-License-Identifier: GPL-3.0-or-later
# luxgale: `make demo` shows the main job, `make check` runs every test; both install what they need on Debian.

VERSION   := 0.1.0
BUILD     ?= build
CC        ?= gcc
OPT       ?= -O2
PKGS      := gsl yaml-0.1
TEST_PKGS := check
WARN      := -Wall -Wextra -Wshadow -Wconversion -Wstrict-prototypes -Wmissing-prototypes -Werror
CFLAGS_   := -std=c11 -D_POSIX_C_SOURCE=200809L $(OPT) -g -fPIC -fno-semantic-interposition -ffp-contract=off $(WARN) \
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

SHARED    := $(BUILD)/libluxgale.so.$(VERSION)
SONAME    := libluxgale.so.$(firstword $(subst ., ,$(VERSION)))
PREFIX    ?= /usr/local
DESTDIR   ?=

JOBS      ?= 2

# Suites that run again under the address and undefined-behaviour sanitizers; the others are too slow for that.
SLOW      ?= wind family linefit
QUICK      = $(filter-out $(SLOW),$(SUITES))

.PHONY: all tests programs clean format format-check check-layers check-symbols
.PHONY: demo check check-cli check-python check-clang check-sanitizers check-units docs install uninstall dist check-install
all: $(BUILD)/luxgale $(LIB) $(SHARED)

$(BUILD)/%.o: %.c
	@mkdir -p $(@D)
	$(CC) $(CFLAGS_) $(CFLAGS) $(PKG_CFLAGS) $(if $(filter tests/%,$<),$(TEST_CFLAGS) -Itests) -MMD -MP -c -o $@ $<

$(LIB): $(LIB_OBJ)
	rm -f $@
	ar rcs $@ $^

$(BUILD)/luxgale: $(CLI_OBJ) $(LIB)
	$(CC) $(OPT) -g -pthread $(LDFLAGS) -o $@ $^ $(PKG_LIBS) -lm

# The shared library exports what the public headers declare, and nothing else.
$(BUILD)/exports.map: $(wildcard include/luxgale/*.h)
	@mkdir -p $(@D)
	@{ echo '{ global:'; grep -ohE '\blxg_[a-z0-9_]+ ?\(' $^ | tr -d ' (' | sort -u | sed 's/$$/;/'; echo 'local: *; };'; } > $@

$(SHARED): $(LIB_OBJ) $(BUILD)/exports.map
	$(CC) -shared -pthread $(OPT) $(LDFLAGS) -Wl,-soname,$(SONAME) -Wl,--version-script=$(BUILD)/exports.map -o $@ $(LIB_OBJ) $(PKG_LIBS) -lm

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
	@for t in second_method tables tutorial tutorial_lines docs; do $(PYTHON) tests/python/check_$$t.py $(BUILD)/luxgale || exit 1; done

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
	@$(MAKE) --no-print-directory format-check check-layers check-symbols check-clang check-sanitizers check-cli check-python check-install
	@$(MAKE) --no-print-directory check-units

# ---- installation: everything made from the same tables as the help; `make uninstall` removes what `make install` put ----

TREE    = $(DESTDIR)$(PREFIX)
STAGE   := $(BUILD)/stage
TABLES  := $(sort $(wildcard opacity/*.ecsv))
SHARE_EXAMPLES := $(sort $(wildcard examples/*.yaml examples/*.ecsv examples/*.csv examples/c/*.c examples/python/*.py))
DOCS    := README.md LICENSE $(sort $(wildcard docs/*.md))

$(STAGE): $(BUILD)/luxgale FORCE
	@rm -rf $@ && mkdir -p $@
	@for f in luxgale.1 luxgale-case.5 completion.bash completion.zsh completion.fish; do $(BUILD)/luxgale help $$f > $@/$$f || exit 1; done
	@{ echo '/* SPDX-License-Identifier: GPL-3.0-or-later'; echo ' *'; echo ' * luxgale.h - every public header of the library.'; echo ' */'; \
	   echo '#ifndef LUXGALE_H'; echo '#define LUXGALE_H'; \
	   for h in $(sort $(notdir $(wildcard include/luxgale/*.h))); do echo "#include \"luxgale/$$h\""; done; echo '#endif'; } > $@/luxgale.h
	@printf '%s\n' 'prefix=$(PREFIX)' 'Name: luxgale' 'Description: radiation-driven winds and ejecta of stellar eruptions' \
	  'Version: $(VERSION)' 'Cflags: -I$${prefix}/include' 'Libs: -L$${prefix}/lib -lluxgale' \
	  'Requires.private: $(PKGS)' 'Libs.private: -lm -pthread' > $@/luxgale.pc

# source file, folder under PREFIX, name there: one line a file
INSTALLED = { \
  echo $(BUILD)/luxgale bin luxgale; echo $(LIB) lib libluxgale.a; echo $(SHARED) lib libluxgale.so.$(VERSION); \
  echo $(STAGE)/luxgale.pc lib/pkgconfig luxgale.pc; echo $(STAGE)/luxgale.h include luxgale.h; \
  for f in $(wildcard include/luxgale/*.h include/luxgale/*.def); do echo $$f include/luxgale $${f\#\#*/}; done; \
  for f in $(TABLES); do echo $$f share/luxgale/opacity $${f\#\#*/}; done; \
  echo $(STAGE)/luxgale.1 share/man/man1 luxgale.1; echo $(STAGE)/luxgale-case.5 share/man/man5 luxgale-case.5; \
  echo $(STAGE)/completion.bash share/bash-completion/completions luxgale; \
  echo $(STAGE)/completion.zsh share/zsh/site-functions _luxgale; \
  echo $(STAGE)/completion.fish share/fish/vendor_completions.d luxgale.fish; \
  for f in $(DOCS); do echo $$f share/doc/luxgale $${f\#\#*/}; done; \
  for f in $(SHARE_EXAMPLES); do d=$${f%/*}; echo $$f share/doc/luxgale/$$d $${f\#\#*/}; done; }

install: all $(STAGE)
	@$(INSTALLED) | while read -r file folder name; do \
	  mode=644; case $$folder in bin | lib) mode=755 ;; esac; [ "$$name" = libluxgale.a ] && mode=644; \
	  install -D -m $$mode "$$file" "$(TREE)/$$folder/$$name" || exit 1; done
	@ln -sf libluxgale.so.$(VERSION) "$(TREE)/lib/$(SONAME)" && ln -sf $(SONAME) "$(TREE)/lib/libluxgale.so"
	@echo "installed under $(TREE)$(if $(DESTDIR),, (run ldconfig if the loader does not find the library))"

uninstall: all $(STAGE)
	@$(INSTALLED) | while read -r file folder name; do rm -f "$(TREE)/$$folder/$$name"; done
	@rm -f "$(TREE)/lib/$(SONAME)" "$(TREE)/lib/libluxgale.so"
	@$(INSTALLED) | while read -r file folder name; do echo "$$folder"; done | sort -ur | while read -r folder; do \
	  [ ! -d "$(TREE)/$$folder" ] || (cd "$(TREE)" && rmdir -p --ignore-fail-on-non-empty "$$folder"); done

# The committed state as one archive.
dist:
	@mkdir -p $(BUILD)
	git archive --format=tar.gz --prefix=luxgale-$(VERSION)/ -o $(BUILD)/luxgale-$(VERSION).tar.gz HEAD
	@echo "$(BUILD)/luxgale-$(VERSION).tar.gz"

FORCE:

check-install: all
	@tests/install.sh "$(MAKE)" $(BUILD)

demo:
	@.ci/need demo
	@$(MAKE) --no-print-directory -s -j$(JOBS) all
	@examples/demo.sh $(BUILD)/luxgale demo-output

docs: $(BUILD)/luxgale
	@mkdir -p docs
	$(BUILD)/luxgale help inputs.md > docs/inputs.md
	$(BUILD)/luxgale help report.md > docs/report.md

clean:
	rm -rf $(BUILD) build-clang build-sanitize build-fuzz build-thread build-coverage build-mutation demo-output

include tests/reliability/reliability.mk

-include $(LIB_OBJ:.o=.d) $(CLI_OBJ:.o=.d) $(TEST_OBJ:.o=.d) $(PROGRAMS:=.d)
