# SPDX-License-Identifier: GPL-3.0-or-later
# Reliability: fuzz targets, fault injection, hostile input, stress, and the scorecard that runs them all.

REL       := tests/reliability
FUZZ_CC   ?= clang
FUZZ_SAN  := address,undefined
# target, source, definitions
FUZZ_TARGETS := units number yaml json set table opacity case lines grid
FUZZ_BUILD   := build-fuzz

fuzz_source = $(REL)/fuzz/fuzz_$(or $(fuzz_source_$(1)),$(1)).c
fuzz_source_yaml  := document
fuzz_source_json  := document
fuzz_source_case  := file
fuzz_source_lines := file
fuzz_source_grid  := file
fuzz_define_yaml  := -DFUZZ_FORMAT=LXG_DOCUMENT_YAML
fuzz_define_json  := -DFUZZ_FORMAT=LXG_DOCUMENT_JSON
fuzz_define_case  := -DFUZZ_FILE=1
fuzz_define_lines := -DFUZZ_FILE=2
fuzz_define_grid  := -DFUZZ_FILE=3

.PHONY: fuzz scorecard scorecard-quick coverage mutation reliability-programs
# The library again with coverage counters and sanitizers, then one program a target.
fuzz:
	@$(MAKE) --no-print-directory -s -j$(JOBS) CC=$(FUZZ_CC) BUILD=$(FUZZ_BUILD) \
	  OPT='-O1 -fsanitize=fuzzer-no-link,$(FUZZ_SAN) -fno-sanitize-recover=undefined' fuzz-programs

.PHONY: fuzz-programs
fuzz-programs: $(FUZZ_TARGETS:%=$(BUILD)/fuzz-%)
define FUZZ_RULE
$(BUILD)/fuzz-$(1): $(call fuzz_source,$(1)) $(REL)/fuzz/fuzz.h $(LIB)
	$$(CC) -std=c11 -D_POSIX_C_SOURCE=200809L -O1 -g -fsanitize=fuzzer,$(FUZZ_SAN) -fno-sanitize-recover=undefined $(WARN) -Iinclude \
	  -I$(REL)/fuzz $(fuzz_define_$(1)) $$(PKG_CFLAGS) -o $$@ $$< $(LIB) $$(PKG_LIBS) -lm -pthread
endef
$(foreach t,$(FUZZ_TARGETS),$(eval $(call FUZZ_RULE,$(t))))

# The program with faults: the command line's main under another name.
$(BUILD)/$(REL)/luxgale_main.o: src/cli/main.c
	@mkdir -p $(@D)
	$(CC) $(CFLAGS_) $(CFLAGS) $(PKG_CFLAGS) -Wno-missing-prototypes -Dmain=luxgale_main -MMD -MP -c -o $@ $<
CLI_PARTS = $(BUILD)/$(REL)/luxgale_main.o $(filter-out %/main.o,$(CLI_OBJ)) $(LIB)
FAULT_WARN := -Wno-missing-prototypes

$(BUILD)/faults: $(REL)/faults.c $(CLI_PARTS)
	$(CC) $(CFLAGS_) $(FAULT_WARN) $(CFLAGS) $(PKG_CFLAGS) -o $@ $^ $(PKG_LIBS) -lm
WRAPPED := malloc calloc realloc free
$(BUILD)/faults-wrap: $(REL)/faults.c $(CLI_PARTS)
	$(CC) $(CFLAGS_) $(FAULT_WARN) $(CFLAGS) -DLXG_WRAP $(WRAPPED:%=-Wl,--wrap=%) $(PKG_CFLAGS) -o $@ $^ $(PKG_LIBS) -lm

$(BUILD)/luxgale-trap: $(REL)/luxgale_trap.c $(CLI_PARTS)
	$(CC) $(CFLAGS_) $(CFLAGS) -o $@ $^ $(PKG_LIBS) -lm

$(BUILD)/stress: $(REL)/stress.c $(LIB)
	$(CC) $(CFLAGS_) $(CFLAGS) $(PKG_CFLAGS) -o $@ $^ $(PKG_LIBS) -lm

reliability-programs: all $(BUILD)/faults $(BUILD)/luxgale-trap $(BUILD)/stress

# One row a test: figure, bar, PASS or FAIL. The quick rows are part of `make check`.
scorecard-quick: reliability-programs
	@$(PYTHON) $(REL)/scorecard.py --quick

scorecard: reliability-programs
	@.ci/need check
	@$(PYTHON) $(REL)/scorecard.py

coverage:
	@$(PYTHON) $(REL)/coverage.py

mutation:
	@$(PYTHON) $(REL)/mutation.py

-include $(BUILD)/$(REL)/luxgale_main.d
