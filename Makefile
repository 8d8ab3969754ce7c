# entrefer. `make help` lists the targets.
PREFIX ?= /usr/local
DESTDIR ?=
LUADIR ?= $(PREFIX)/share/lua/5.4
LIBDIR ?= $(PREFIX)/lib/lua/5.4
BINDIR ?= $(PREFIX)/bin

BUILD ?= build
LUA ?= /usr/bin/lua5.4
# `SETUP=:` where the packages are installed by other means.
SETUP ?= sh tests/tools/setup.sh
CC ?= cc
CFLAGS ?= -O2
STRICT ?= $(CI)

# No contraction: results agree within 1e-9 across compilers and optimisation levels.
FLAGS = -std=c11 -fPIC -Wall -Wextra -Wpedantic -Wconversion -ffp-contract=off -MMD -MP \
  $(if $(STRICT),-Werror)
# Asked for in the recipes, not at the top: setup may have to install pkg-config first.
PACKAGE_FLAGS = $(shell pkg-config --cflags lua5.4 lapacke)
LIBS = $(shell pkg-config --libs lapacke) -lm

BINDING = $(wildcard csrc/lua/*.c)
CORE = $(filter-out $(BINDING),$(wildcard csrc/*/*.c))
OBJECTS = $(CORE:csrc/%.c=$(BUILD)/obj/%.o)
BINDING_OBJECTS = $(BINDING:csrc/%.c=$(BUILD)/obj/%.o)
LIBRARY = $(BUILD)/libentrefer.a
MODULE = $(BUILD)/lua/entrefer/core.so
HEADERS = $(filter-out %_internal.h csrc/lua/%,$(wildcard csrc/*.h csrc/*/*.h))

# The BLAS keeps to one thread in tests, bench and demo, so that their figures repeat.
ENVIRONMENT = OPENBLAS_NUM_THREADS=1 LUA_PATH="lua/?.lua;lua/?/init.lua;;" \
  LUA_CPATH="$(BUILD)/lua/?.so;;"
BUSTED = $(ENVIRONMENT) busted --lua=$(LUA) --output=plainTerminal
# The same without a second process, for tools that watch one.
UNDER_LUA = $(LUA) $$(command -v busted) --output=plainTerminal

SANITIZE_FLAGS = -O1 -g -fno-omit-frame-pointer -fsanitize=address,undefined \
  -fno-sanitize-recover=undefined
# The reference BLAS: OpenBLAS keeps memory of its own.
REFERENCE_BLAS = $(shell for d in /usr/lib/*/blas /usr/lib/*/lapack; do printf '%s:' $$d; done)

.DEFAULT_GOAL = help
.PHONY: demo test test-slow build install install-lua bench lint sanitize valgrind clean setup help

demo: ## run the worked example, orchard-cart (installs what is missing)
	@$(SETUP) run build
	@$(MAKE) --no-print-directory build
	@mkdir -p build/demo/orchard-cart
	@$(ENVIRONMENT) $(LUA) lua/bin/entrefer run recipes/part-from-spec.lua \
	  spec=examples/orchard-cart/spec.lua --out build/demo/orchard-cart

test: ## build and run all but the slow tests (installs what is missing)
	@$(SETUP) run build test
	@$(MAKE) --no-print-directory build
	$(BUSTED)

test-slow: build ## run the slow tests
	$(BUSTED) --run=slow

build: $(LIBRARY) $(MODULE) ## compile the C core and its Lua module

$(BUILD)/obj/%.o: csrc/%.c
	@mkdir -p $(@D)
	@echo "  compile $<"
	@$(CC) $(FLAGS) $(CFLAGS) $(CPPFLAGS) $(PACKAGE_FLAGS) -c $< -o $@

$(LIBRARY): $(OBJECTS)
	@echo "  archive $@"
	@rm -f $@
	@$(AR) rcs $@ $^

# The core's own symbols stay inside the module: a host may link another copy.
$(MODULE): $(BINDING_OBJECTS) $(LIBRARY)
	@mkdir -p $(@D)
	@echo "  link    $@"
	@$(CC) -shared $(CFLAGS) $(LDFLAGS) -Wl,--exclude-libs,ALL $^ -o $@ $(LIBS)

-include $(OBJECTS:.o=.d) $(BINDING_OBJECTS:.o=.d)

install-lua: build ## install the Lua library, the command and the recipes below PREFIX
	cd lua && find entrefer -name '*.lua' -exec install -D -m 644 {} "$(DESTDIR)$(LUADIR)/{}" \;
	install -D -m 755 $(MODULE) "$(DESTDIR)$(LIBDIR)/entrefer/core.so"
	install -D -m 755 lua/bin/entrefer "$(DESTDIR)$(BINDIR)/entrefer"
	for f in recipes/*.lua; do \
	  install -D -m 644 $$f "$(DESTDIR)$(PREFIX)/share/entrefer/$$f" || exit 1; done

install: install-lua ## install-lua, and the C library with its headers
	install -D -m 644 $(LIBRARY) "$(DESTDIR)$(PREFIX)/lib/libentrefer.a"
	for f in $(HEADERS:csrc/%=%); do \
	  install -D -m 644 csrc/$$f "$(DESTDIR)$(PREFIX)/include/entrefer/$$f" || exit 1; done

bench: build ## time the solvers
	@for f in tests/bench/*.lua; do echo "$$f"; $(ENVIRONMENT) $(LUA) $$f || exit 1; done

lint: ## luacheck, clang-tidy and clang-format, any warning fails
	@$(SETUP) run build lint
	luacheck --quiet --no-color lua recipes examples tests lua/bin/entrefer
	clang-format --dry-run -Werror csrc/*.h csrc/*/*.[ch]
	@mkdir -p $(BUILD)
	@# Its count of suppressed warnings in system headers goes to standard error: shown on failure only.
	clang-tidy --quiet csrc/*/*.c -- -std=c11 $(PACKAGE_FLAGS) 2>$(BUILD)/clang-tidy.log \
	  || { cat $(BUILD)/clang-tidy.log; false; }

# The interpreter is built without the sanitizers, so their runtime is loaded before it. Leaks are
# looked for when it has closed its state; nothing is suppressed.
sanitize: BUILD = build/sanitize
sanitize: ## run the tests with the address, leak and undefined-behaviour sanitizers
	@$(SETUP) run build test
	@$(MAKE) --no-print-directory build BUILD=$(BUILD) CFLAGS="$(SANITIZE_FLAGS)"
	$(ENVIRONMENT) LD_LIBRARY_PATH="$(REFERENCE_BLAS)" ASAN_OPTIONS=detect_leaks=1 \
	  LD_PRELOAD=$$($(CC) -print-file-name=libasan.so) $(UNDER_LUA)

valgrind: ## run the tests under valgrind (slow)
	@$(SETUP) run build test lint
	@$(MAKE) --no-print-directory build
	$(ENVIRONMENT) LD_LIBRARY_PATH="$(REFERENCE_BLAS)" valgrind --quiet --error-exitcode=1 \
	  --leak-check=full --errors-for-leak-kinds=definite $(UNDER_LUA)

clean: ## remove everything built
	rm -rf build

setup: ## install the packages for running, building, testing and linting
	@$(SETUP) run build test lint

help: ## print this list
	@grep -hE '^[a-z-]+:.*## ' $(MAKEFILE_LIST) | sed 's/:.*## /\t/' | expand -t 14
