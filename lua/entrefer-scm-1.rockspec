-- Built from a checkout: luarocks-5.4 make --deps-mode=none --tree build/rock lua/entrefer-scm-1.rockspec
-- The Makefile does the work; it needs a C compiler, pkg-config, Lua's headers and LAPACKE.
rockspec_format = "3.0"
package = "entrefer"
version = "scm-1"
source = { url = "." }
description = {
  summary = "Gapped magnetic parts that measure their own current",
  detailed = [[
Computes gapped ferrite parts that carry power and measure their own current with a magnetic sensor
in the gap: core, gap, turns and wire, saturation, sensor choice, and what is handed over.]],
  license = "MIT",
}
supported_platforms = { "unix" }
dependencies = { "lua ~> 5.4" }
external_dependencies = { LAPACKE = { header = "lapacke.h" } }
build = {
  type = "make",
  build_target = "build",
  install_target = "install-lua",
  build_variables = { CFLAGS = "$(CFLAGS)" },
  install_variables = {
    PREFIX = "$(PREFIX)", LUADIR = "$(LUADIR)", LIBDIR = "$(LIBDIR)", BINDIR = "$(BINDIR)",
  },
}
