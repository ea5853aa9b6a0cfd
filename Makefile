# beamhour: make builds; make check builds with warnings as errors and tests; make demo plans
# an example. SAN=1 builds with address and undefined-behaviour sanitizers into build-san/.
PREFIX  ?= /usr/local
BUILD   := $(if $(SAN),build-san,build)
CC      ?= gcc
VERSION := 0.1.0

# library = its pkg-config name : its Debian package
NEEDS   := libconfuse:libconfuse-dev libxrl:libxrl-dev spglib:libsymspg-dev \
           jansson:libjansson-dev pangocairo:libpango1.0-dev fontconfig:libfontconfig-dev
TEST_NEEDS := cmocka:libcmocka-dev
packages = $(foreach need,$(1),$(firstword $(subst :, ,$(need))))

ifeq ($(filter demo check check-run packages clean format help,$(MAKECMDGOALS)),)
missing := $(foreach need,$(NEEDS),$(if $(shell pkg-config --exists \
    $(firstword $(subst :, ,$(need))) 2>/dev/null && echo yes),,$(lastword $(subst :, ,$(need)))))
ifneq ($(strip $(missing)),)
$(error a library is missing; on Debian: apt-get install pkg-config $(strip $(missing)))
endif
endif

LIBS   := $(call packages,$(NEEDS))
WARN   := -Wall -Wextra -Wpedantic -Wconversion -Wsign-conversion -Wshadow -Wstrict-prototypes \
          -Wmissing-prototypes -Wold-style-definition -Wwrite-strings -Wcast-qual \
          -Wpointer-arith -Wvla -Wundef -Wdouble-promotion -Wformat=2
CFLAGS ?= -O2 -g
override CFLAGS += -std=c11 -D_POSIX_C_SOURCE=200809L $(WARN) $(if $(WERROR),-Werror) \
          $(if $(SAN),-fsanitize=address$(,)undefined -fno-omit-frame-pointer) \
          -Isrc -Iinclude -DBH_VERSION='"$(VERSION)"' -DBH_SHARE='"$(PREFIX)/share/beamhour"' \
          -MMD -MP $(patsubst -I%,-isystem %,$(shell pkg-config --cflags $(LIBS) 2>/dev/null))
LDLIBS := $(shell pkg-config --libs $(LIBS) 2>/dev/null) -lsymspg -lm
,      := ,

SRC    := $(wildcard src/*/*.c)
OBJ    := $(SRC:%.c=$(BUILD)/%.o)
CORE   := $(filter-out $(BUILD)/src/cli/%,$(OBJ)) $(filter-out %/main.o,$(filter $(BUILD)/src/cli/%,$(OBJ)))
TESTS  := $(patsubst %.c,$(BUILD)/%,$(wildcard tests/*/test_*.c))
SUPPORT := $(patsubst %.c,$(BUILD)/%.o,$(wildcard tests/support/*.c))

all: $(BUILD)/beamhour
$(BUILD)/beamhour: $(OBJ)
	$(CC) $(CFLAGS) $(LDFLAGS) -o $@ $^ $(LDLIBS)
$(BUILD)/%.o: %.c
	@mkdir -p $(@D)
	$(CC) $(CFLAGS) -c -o $@ $<
$(BUILD)/libbeamhour.a: $(CORE)
	rm -f $@; ar rcs $@ $^
$(BUILD)/tests/%: $(BUILD)/tests/%.o $(SUPPORT) $(BUILD)/libbeamhour.a
	$(CC) $(CFLAGS) $(LDFLAGS) -o $@ $^ $(LDLIBS) -lcmocka

-include $(OBJ:.o=.d) $(TESTS:=.d)
.PHONY: all
.SECONDARY:
