# beamhour. `make` builds; `make demo` installs what is missing, builds and plans an example;
# `make check` does the same for the tests and runs them all. `make help` lists the rest.
# SAN=1 builds with address and undefined-behaviour sanitizers into build-san/, WERROR=1 stops
# at a warning, MEMCHECK=1 runs the test programs under valgrind.
PREFIX  ?= /usr/local
BUILD   := $(if $(SAN),build-san,build)
CC      := $(if $(filter default,$(origin CC)),gcc,$(CC))
VERSION := 0.1.0
,       := ,

# What is needed, as pkg-config name : Debian package.
NEEDS := libconfuse:libconfuse-dev libxrl:libxrl-dev spglib:libsymspg-dev \
         jansson:libjansson-dev zlib:zlib1g-dev pangocairo:libpango1.0-dev fontconfig:libfontconfig-dev
LIBS  := $(foreach need,$(NEEDS),$(firstword $(subst :, ,$(need))))
BUILD_PACKAGES := gcc libc6-dev pkg-config $(foreach need,$(NEEDS),$(lastword $(subst :, ,$(need)))) \
                  fonts-dejavu-core
CHECK_PACKAGES := libcmocka-dev poppler-utils python3-jsonschema $(if $(MEMCHECK),valgrind)

ifneq ($(filter-out demo check clean format help,$(or $(MAKECMDGOALS),all)),)
missing := $(foreach need,$(NEEDS),$(if $(shell pkg-config --exists \
    $(firstword $(subst :, ,$(need))) 2>/dev/null && echo yes),,$(lastword $(subst :, ,$(need)))))
ifneq ($(strip $(missing)),)
$(error a library is missing; on Debian: apt-get install pkg-config $(strip $(missing)))
endif
endif

WARN := -Wall -Wextra -Wpedantic -Wconversion -Wsign-conversion -Wshadow -Wstrict-prototypes \
        -Wmissing-prototypes -Wold-style-definition -Wwrite-strings -Wcast-qual \
        -Wpointer-arith -Wvla -Wundef -Wdouble-promotion -Wformat=2
CFLAGS ?= -O2 -g
override CFLAGS += -std=c11 -D_POSIX_C_SOURCE=200809L $(WARN) $(if $(WERROR),-Werror) \
        $(if $(SAN),-fsanitize=address$(,)undefined -fno-sanitize-recover=all -fno-omit-frame-pointer) \
        -Isrc -Iinclude -Itests -I. -DBH_VERSION='"$(VERSION)"' -DBH_SHARE='"$(PREFIX)/share/beamhour"' \
        -MMD -MP -fopenmp $(patsubst -I%,-isystem %,$(shell pkg-config --cflags $(LIBS) 2>/dev/null))
LDLIBS := $(shell pkg-config --libs $(LIBS) 2>/dev/null) -lm

OBJ     := $(patsubst %.c,$(BUILD)/%.o,$(wildcard src/*/*.c))
CORE    := $(filter-out $(BUILD)/src/cli/main.o,$(OBJ))
SUPPORT := $(patsubst %.c,$(BUILD)/%.o,$(wildcard tests/support/*.c))
TESTS   := $(patsubst %.c,$(BUILD)/%,$(wildcard tests/*/test_*.c))
SCRIPTS := $(wildcard tests/*/test_*.sh)
ifeq ($(MAKELEVEL),0)
MAKEFLAGS += -j$(shell nproc) --no-print-directory
endif

all: $(BUILD)/beamhour
$(BUILD)/beamhour: $(OBJ)
	$(CC) $(CFLAGS) $(LDFLAGS) -o $@ $^ $(LDLIBS)
$(BUILD)/settings: force
	@mkdir -p $(@D)
	@echo '$(subst ','\'',$(CC) $(filter-out -Werror,$(CFLAGS)))' | cmp -s - $@ 2>/dev/null || \
	    echo '$(subst ','\'',$(CC) $(filter-out -Werror,$(CFLAGS)))' > $@
$(BUILD)/%.o: %.c $(BUILD)/settings
	@mkdir -p $(@D)
	$(CC) $(CFLAGS) -c -o $@ $<
$(BUILD)/libbeamhour.a: $(CORE)
	rm -f $@ && ar rcs $@ $^
$(BUILD)/tests/%: $(BUILD)/tests/%.o $(SUPPORT) $(BUILD)/libbeamhour.a
	$(CC) $(CFLAGS) $(LDFLAGS) -o $@ $^ $(LDLIBS) -lcmocka

demo:
	@tests/support/need.sh "to build" $(BUILD_PACKAGES)
	@$(MAKE) -s all
	@$(BUILD)/beamhour plan examples/harbour-steel.conf -o $(BUILD)/harbour-steel.pdf; \
	    status=$$?; [ $$status -le 1 ] && echo "The sheet for the bench: $(BUILD)/harbour-steel.pdf"
check:
	@tests/support/need.sh "to build and test" $(BUILD_PACKAGES) $(CHECK_PACKAGES)
	@$(MAKE) -s WERROR=1 all $(TESTS)
	@$(MAKE) -s run-tests
run-tests:
	@BEAMHOUR=$(BUILD)/beamhour CC="$(CC)" MEMCHECK=$(MEMCHECK) \
	    tests/support/run.sh $(BUILD)/logs $(TESTS) $(SCRIPTS)
bench: all
	@BEAMHOUR=$(BUILD)/beamhour tests/bench/examples.sh
docs: $(BUILD)/tests/house/test_docs
	@$< --write
golden: all
	@BEAMHOUR=$(BUILD)/beamhour tests/golden/test_golden.sh --write
format:
	clang-format -i $(wildcard src/*/*.[ch] include/*.h tests/*/*.[ch])
install: all
	install -Dm755 $(BUILD)/beamhour $(DESTDIR)$(PREFIX)/bin/beamhour
	install -Dm644 include/beamhour-plan.schema.json $(DESTDIR)$(PREFIX)/share/beamhour/beamhour-plan.schema.json
	for file in $(wildcard presets/*/* examples/*); do \
	    install -Dm644 $$file $(DESTDIR)$(PREFIX)/share/beamhour/$$file || exit 1; done
uninstall:
	rm -rf $(DESTDIR)$(PREFIX)/bin/beamhour $(DESTDIR)$(PREFIX)/share/beamhour
clean:
	rm -rf build build-san
help:
	@echo "make            build $(BUILD)/beamhour"
	@echo "make demo       install what is missing, build, plan an example to terminal and PDF"
	@echo "make check      install what is missing, build without a warning, run all tests"
	@echo "make bench      processor time of the examples"
	@echo "make docs       renew the tables in README.md that the program's own tables feed"
	@echo "make golden     renew the kept plans under tests/golden and show what moved"
	@echo "make format     set the sources in the house style"
	@echo "make install    into PREFIX ($(PREFIX)), below DESTDIR; uninstall takes it out again"
	@echo "make clean      remove build/ and build-san/"

-include $(OBJ:.o=.d) $(TESTS:=.d) $(SUPPORT:.o=.d)
.PHONY: all force demo check run-tests bench docs golden format install uninstall clean help
.SECONDARY:
