/* A Lua state whose memory runs out at every possible place while tests/fuzz/host.lua works: only
 * an error may come, and closing the state must give everything back. Usage: host SCRIPT CPATH */
#include "counting.h"

#include <lauxlib.h>
#include <lua.h>
#include <lualib.h>

/* Loads the script, leaving its function on the stack; returns 0 with a message when it can't. */
static int load(lua_State *L, const char *script, const char *cpath) {
  luaL_openlibs(L);
  lua_getglobal(L, "package");
  lua_pushstring(L, cpath);
  lua_setfield(L, -2, "cpath");
  lua_settop(L, 0);
  if (luaL_loadfile(L, script) == LUA_OK && lua_pcall(L, 0, 1, 0) == LUA_OK) return 1;
  printf("%s\n", lua_tostring(L, -1));
  return 0;
}

/* Runs with the n-th allocation of the work refused, and those after it. 1: the work was done
 * before that; 0: it ended with an error; -1: something is wrong. */
static int attempt(size_t n, const char *script, const char *cpath) {
  counting c = {0};
  lua_State *L = lua_newstate(counting_resize, &c);
  if (!L || !load(L, script, cpath)) return -1;
  lua_gc(L, LUA_GCCOLLECT);
  c.for_good = 1;
  c.fail_at = c.calls + n;
  int status = lua_pcall(L, 0, 0, 0);
  int reached = c.calls >= c.fail_at;
  c.fail_at = 0;
  if (status != LUA_OK && !reached) printf("%s\n", lua_tostring(L, -1));
  lua_close(L);
  if (c.live || c.wrong)
    printf("allocation %zu refused: %zu blocks kept, %zu of a wrong size\n", n, c.live, c.wrong);
  if (c.live || c.wrong || (status != LUA_OK && !reached)) return -1;
  return status == LUA_OK && !reached;
}

int main(int count, char **argument) {
  if (count != 3) return 2;
  size_t n = 1;
  int done = 0;
  while (done == 0 && n < 100000)
    done = attempt(n++, argument[1], argument[2]);
  printf("%zu allocations refused\n", n - 2);
  return done != 1;
}
