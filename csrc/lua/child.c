/* core.child(limits, f) -> plain data that f returned in a child process. For the command. */
#include <string.h>

#include "../command/child.h"
#include "binding.h"
#include "plain.h"

#define BYTES "entrefer.bytes"

static int release_bytes(lua_State *L) {
  efl_bytes_release(luaL_checkudata(L, 1, BYTES));
  return 0;
}

static efl_bytes *new_bytes(lua_State *L, size_t most) {
  efl_bytes *bytes = lua_newuserdatauv(L, sizeof *bytes, 0);
  memset(bytes, 0, sizeof *bytes);
  bytes->resize = lua_getallocf(L, &bytes->user);
  bytes->most = most;
  luaL_setmetatable(L, BYTES);
  return bytes;
}

/* In the child; does not return. A failure here is told by an answer that is no table. */
static void work(lua_State *L, int pipe, efl_bytes *bytes) {
  lua_pushvalue(L, 2);
  lua_pcall(L, 0, 1, 0);
  const char *problem = efl_plain_write(L, -1, bytes);
  if (problem) {
    bytes->count = 0;
    lua_settop(L, 3);
    lua_pushstring(L, problem);
    efl_plain_write(L, -1, bytes);
  }
  ef_child_answer(pipe, bytes->bytes, bytes->count);
}

/* Reads all that the child writes; nothing here raises, so that the child is always waited for. */
static int gather(int pipe, efl_bytes *bytes) {
  char part[4096];
  size_t got;
  while ((got = ef_child_read(pipe, part, sizeof part)) > 0)
    if (efl_bytes_append(bytes, part, got)) return 0;
  return 1;
}

static int raise_end(lua_State *L, ef_child_end end, int whole) {
  const char *message =
      "the process of the run ended without an answer (it crashed, or its memory ran"
      " out)";
  if (!whole) message = "the process of the run handed over too much";
  if (end == EF_CHILD_SECONDS) message = "the process of the run took too much processor time";
  if (end == EF_CHILD_STOPPED) message = "the run was stopped; nothing was written";
  efl_push_error(L, end == EF_CHILD_STOPPED ? "cancelled" : "limit", "process", message);
  return lua_error(L);
}

/* limits: `seconds` of processor time, `memory` and `result` in bytes. f takes nothing and returns
 * plain data; it must catch its own errors. */
static int run_child(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  luaL_checktype(L, 2, LUA_TFUNCTION);
  lua_settop(L, 2);
  ef_child_limits limits = {(unsigned)efl_number(L, 1, "", "seconds") + 1,
                            (size_t)efl_number(L, 1, "", "memory")};
  efl_bytes *bytes = new_bytes(L, (size_t)efl_number(L, 1, "", "result"));
  luaL_checkstack(L, 8, NULL);
  int pipe = -1;
  pid_t child = ef_child_start(&limits, &pipe);
  if (child == 0) work(L, pipe, bytes);
  if (child < 0) return efl_raise_text(L, "process", "a process for the run can't be started");
  int whole = gather(pipe, bytes);
  ef_child_end end = ef_child_finish(child, pipe);
  if (end != EF_CHILD_DONE || !whole) return raise_end(L, end, whole);
  efl_plain_read(L, bytes->bytes, bytes->count);
  efl_bytes_release(bytes);
  return 1;
}

void efl_open_child(lua_State *L) {
  luaL_newmetatable(L, BYTES);
  lua_pushcfunction(L, release_bytes);
  lua_setfield(L, -2, "__gc");
  lua_pop(L, 1);
  lua_pushcfunction(L, run_child);
  lua_setfield(L, -2, "child");
}
