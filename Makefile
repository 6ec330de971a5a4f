# beamward: plain make. `make demo` and `make test` are all that a user needs; `make help` lists the rest.

VERSION = 0.1.0
BUILD  ?= build
CC     ?= cc
CFLAGS ?= -O2 -g
# A line a file; `make SAY=` shows the whole commands.
SAY    ?= @echo '  $@';
WARN    = -Wall -Wextra -Wpedantic -Werror -Wconversion -Wshadow -Wdouble-promotion -Wvla -Wfloat-equal \
          -Wformat=2 -Wundef -Wwrite-strings -Wcast-qual -Wswitch-enum -Wstrict-prototypes -Wmissing-prototypes
COMPILE = $(SAY)$(CC) -std=c11 -D_POSIX_C_SOURCE=200809L $(WARN) -ffp-contract=off -Iinclude -MMD -MP $(CFLAGS)

# The house, top floor first: each module uses only those to its right.
MODULES = report assess casefile room eyewear hazard beam limits base
INCLUDE_INI = -I/usr/include/iniparser

RULE_SETS = $(wildcard limits_tables/*.ini)

# What is built from C, one archive a module, so that a test links its module and the floors below.
sources = $(filter-out src/limits/tablec.c src/casefile/embed.c,$(wildcard src/$(1)/*.c))
objects = $(patsubst src/%.c,$(BUILD)/obj/%.o,$(call sources,$(1)))
archive = $(BUILD)/lib/$(1).a
floors_from = $(if $(filter $(1),$(firstword $(2))),$(2),$(call floors_from,$(1),$(wordlist 2,99,$(2))))
archives_from = $(foreach m,$(call floors_from,$(1),$(MODULES)),$(call archive,$(m)))

PROGRAM = $(BUILD)/beamward
UNIT_TESTS = $(patsubst tests/unit/%.c,$(BUILD)/tests/unit/%,$(wildcard tests/unit/test_*.c))
PUBLISHED_TESTS = $(patsubst tests/published/%.c,$(BUILD)/tests/published/%,$(wildcard tests/published/test_*.c))
FILE_TESTS = $(patsubst tests/%.c,$(BUILD)/tests/%,$(wildcard tests/reference/test_*.c tests/mutation/test_*.c \
                                                              tests/bad_cases/test_*.c tests/cli/test_*.c \
                                                              tests/faults/test_*.c tests/tablec/test_*.c))
TESTS = $(UNIT_TESTS) $(PUBLISHED_TESTS) $(FILE_TESTS)

.PHONY: all demo test tests run-tests check clang sanitize bench coverage demo-run packages-build packages-test packages-check packages-bench clean help
.SECONDARY:
all: $(PROGRAM)

help:
	@echo 'make demo      get what is missing, build, run the whole job on examples/'
	@echo 'make test      get what is missing, build, run every test'
	@echo 'make check     the tests again with clang and under the address and undefined-behaviour sanitizers'
	@echo 'make bench     how fast it is, beside numpy and GNU Octave'
	@echo 'make coverage  branches of limits, beam and hazard that the tests take'
	@echo 'make all       build only: $(PROGRAM)'
	@echo 'make clean     remove $(BUILD)/'

# ---- the two commands of README -----------------------------------------------------------------

demo: packages-build
	@$(MAKE) --no-print-directory -j2 all
	@$(MAKE) --no-print-directory demo-run

test: packages-build packages-test
	@$(MAKE) --no-print-directory -j2 all tests
	@$(MAKE) --no-print-directory run-tests

# Exit code 1 of `assess` means that something needs action: so it is in a demonstration.
DEMO_CASES = physio-clinic horse-clinic
demo-run:
	@for name in $(DEMO_CASES); do \
	    echo "== examples/$$name.ini"; \
	    $(PROGRAM) assess examples/$$name.ini --out $(BUILD)/demo/$$name; [ $$? -le 1 ] || exit 1; echo; \
	done
	@echo 'Open in a browser:'
	@for name in $(DEMO_CASES); do echo "  $(BUILD)/demo/$$name/report.html"; done

tests: $(TESTS)

# All programs run, whatever one of them finds; the last line tells how many failed.
run-tests:
	@failed=0; for program in $(TESTS); do \
	    echo "== $$program"; $$program || { failed=$$((failed + 1)); echo "FAILED: $$program"; }; \
	done; \
	if [ $$failed -ne 0 ]; then echo "$$failed test programs failed"; exit 1; fi; echo "all $(words $(TESTS)) test programs passed"

# ---- what has to be there -----------------------------------------------------------------------

# $(call need,what for,headers or programs,Debian packages): installs as root, else says what to install.
define need
	@missing=; \
	for header in $(2); do \
	    printf '#include <%s>\n' "$$header" | $(CC) $(INCLUDE_INI) -include stdint.h -include stdarg.h -include setjmp.h -E -x c - >/dev/null 2>&1 || missing=1; \
	done; \
	for program in $(3); do command -v "$$program" >/dev/null 2>&1 || missing=1; done; \
	[ -z "$$missing" ] || if [ "$$(id -u)" = 0 ] && command -v apt-get >/dev/null; then \
	    export DEBIAN_FRONTEND=noninteractive; \
	    apt-get update -q && apt-get install -y -q --no-install-recommends $(4); \
	else \
	    echo 'To $(1), please install: $(4)'; echo '  sudo apt-get install $(4)'; exit 1; \
	fi
endef
packages-build:
	$(call need,build beamward,iniparser.h sha2.h,,libc6-dev libiniparser-dev libmd-dev)
packages-test:
	$(call need,test beamward,cmocka.h gsl/gsl_integration.h,,libcmocka-dev libgsl-dev)
packages-check:
	$(call need,check beamward,,clang,clang)

packages-bench: # without numpy python3 says so, and its words are programs that are not there
	$(call need,run the benchmark,,octave-cli $(PYTHON) $(shell $(PYTHON) -c 'import numpy' 2>&1 | tail -n 1 | cut -d: -f1),python3-numpy octave)

# ---- assurances ---------------------------------------------------------------------------------

check: clang sanitize
clang: packages-build packages-test packages-check
	@$(MAKE) --no-print-directory -j2 BUILD=$(BUILD)/clang CC=clang all tests
	@$(MAKE) --no-print-directory BUILD=$(BUILD)/clang CC=clang run-tests
sanitize: packages-build packages-test
	@$(MAKE) --no-print-directory -j2 BUILD=$(BUILD)/sanitize \
	    CFLAGS='-O1 -g -fsanitize=address,undefined -fno-sanitize-recover=all -fno-omit-frame-pointer' all tests
	@$(MAKE) --no-print-directory BUILD=$(BUILD)/sanitize run-tests

# A benchmark, not a test: times depend on the machine. The same work in three languages, the answers compared.
PYTHON ?= /usr/bin/python3
BENCH = $(BUILD)/bench
BENCH_FILES = $(BENCH)/pairs $(BENCH)/results $(BENCH)/times
bench: packages-build packages-bench
	@$(MAKE) --no-print-directory -j2 $(BENCH)/bench_beamward
	@$(BENCH)/bench_beamward $(BENCH_FILES)
	@env -u OPENBLAS_CORETYPE -u OPENBLAS_L2_SIZE $(PYTHON) tests/bench/bench_numpy.py $(BENCH_FILES)
	@octave-cli --norc --no-history tests/bench/bench_octave.m $(BENCH_FILES)
	@awk -F';' 'NR == 1 { ours = $$2 } \
	    { printf "  %-20s best %7.1f ms, median %7.1f ms, %5.1f times the time of beamward\n", $$1, $$2 * 1e3, $$3 * 1e3, $$2 / ours }' \
	    $(BENCH)/times
$(BENCH)/bench_beamward: $(BUILD)/testobj/bench/bench_beamward.o $(BUILD)/testobj/bench/bench.o $(call archives_from,hazard)
	@mkdir -p $(@D)
	$(SAY)$(CC) $(CFLAGS) -Wl,--wrap=malloc -Wl,--wrap=calloc -Wl,--wrap=realloc $^ -lm -o $@

# Branches of the floors that decide, by the whole test run. A line a file, then the branches never taken.
COVERED = limits beam hazard
coverage: packages-build packages-test
	@rm -rf $(BUILD)/coverage/report; find $(BUILD)/coverage -name '*.gcda' -delete 2>/dev/null || true
	@$(MAKE) --no-print-directory -j2 BUILD=$(BUILD)/coverage CFLAGS='-O0 -g --coverage' all tests
	@$(MAKE) --no-print-directory BUILD=$(BUILD)/coverage run-tests
	@mkdir -p $(BUILD)/coverage/report; for module in $(COVERED); do \
	    for data in $(BUILD)/coverage/obj/$$module/*.gcda; do \
	        gcov -b -c -t -o $$(dirname $$data) $$data >$(BUILD)/coverage/report/$$module-$$(basename $$data .gcda).gcov; \
	    done; \
	done
	@sh tests/coverage/report.sh $(BUILD)/coverage/report

# ---- building -----------------------------------------------------------------------------------

$(BUILD)/obj/%.o: src/%.c
	@mkdir -p $(@D)
	$(COMPILE) $(INCLUDE_INI) -DBEAMWARD_VERSION='"$(VERSION)"' -c $< -o $@

# Loops over many numbers: nothing in them reads errno or a trap, so that they can become vector instructions.
$(BUILD)/obj/limits/columns.o $(BUILD)/obj/hazard/columns.o: override CFLAGS += -O3 -fno-math-errno -fno-trapping-math

define module_rule
$(call archive,$(1)): $(call objects,$(1)) $$($(1)_EXTRA)
	@mkdir -p $$(@D)
	@rm -f $$@
	$$(SAY)ar rcs $$@ $$^
endef
limits_EXTRA = $(BUILD)/obj/limits/tables_data.o
casefile_EXTRA = $(BUILD)/obj/casefile/texts_data.o
$(foreach m,$(MODULES),$(eval $(call module_rule,$(m))))

# The tables: a host program checks them and writes them out as C.
TABLEC = $(BUILD)/tablec
TABLEC_PARTS = tablec table_read table_read_rows table_read_rules table_cells table_check table_check_parts \
               table_check_train table_index table_plan material_read formulas names memory table_facts
$(TABLEC): $(TABLEC_PARTS:%=$(BUILD)/obj/limits/%.o) $(call archive,base)
	$(SAY)$(CC) $(CFLAGS) $^ -liniparser -lm -o $@
$(BUILD)/generated/tables_data.c: $(TABLEC) $(RULE_SETS)
	@mkdir -p $(@D)
	$(SAY)$(TABLEC) --out $@ $(RULE_SETS)
$(BUILD)/obj/limits/tables_data.o: $(BUILD)/generated/tables_data.c src/limits/internal.h
	@mkdir -p $(@D)
	$(COMPILE) -Isrc/limits -c $< -o $@

# The starter and the examples: a host program writes them out as C. One with deliberate mistakes is no start.
EMBED = $(BUILD)/embed
CASE_TEXTS = src/casefile/starter.ini $(filter-out examples/mistakes.ini,$(sort $(wildcard examples/*.ini)))
$(EMBED): src/casefile/embed.c
	@mkdir -p $(@D)
	$(COMPILE) $< -o $@
$(BUILD)/generated/texts_data.c: $(EMBED) $(CASE_TEXTS)
	@mkdir -p $(@D)
	$(SAY)$(EMBED) $@ $(CASE_TEXTS)
$(BUILD)/obj/casefile/texts_data.o: $(BUILD)/generated/texts_data.c src/casefile/internal.h
	@mkdir -p $(@D)
	$(COMPILE) -Isrc/casefile -c $< -o $@

LIBS = -liniparser -lm
$(PROGRAM): $(call objects,cli) $(call archives_from,report)
	$(SAY)$(CC) $(CFLAGS) $^ $(LIBS) -lmd -o $@

# tests/unit/test_X.c links module X and the floors below; the others link everything.
.SECONDEXPANSION:
$(BUILD)/tests/unit/test_%: $(BUILD)/testobj/unit/test_%.o $$(call archives_from,$$(firstword $$(subst _, ,$$*)))
	@mkdir -p $(@D)
	$(SAY)$(CC) $(CFLAGS) $^ $(LIBS) -lcmocka -lgsl -lgslcblas -lm -o $@
$(BUILD)/tests/%: $(BUILD)/testobj/%.o $(call archives_from,report)
	@mkdir -p $(@D)
	$(SAY)$(CC) $(CFLAGS) $^ $(LIBS) -lcmocka -lgsl -lgslcblas -lm -o $@
# Memory that runs short: the test stands between the program and the allocator.
$(BUILD)/tests/faults/%: $(BUILD)/testobj/faults/%.o $(call archives_from,report)
	@mkdir -p $(@D)
	$(SAY)$(CC) $(CFLAGS) -Wl,--wrap=malloc -Wl,--wrap=calloc -Wl,--wrap=realloc -Wl,--wrap=free $^ $(LIBS) -lcmocka -lm -o $@
$(BUILD)/tests/tablec/test_tablec: | $(TABLEC)
$(BUILD)/testobj/%.o: tests/%.c
	@mkdir -p $(@D)
	$(COMPILE) -Itests -DTEST_PROGRAM='"$(PROGRAM)"' -DTEST_TABLEC='"$(TABLEC)"' -c $< -o $@

-include $(shell find $(BUILD) -name '*.d' 2>/dev/null)

clean:
	rm -rf $(BUILD)
