/* core.isolated(spec): runs Lua text in a fresh state of its own, with limits, and hands plain data
 * in and out. Nothing else crosses. */
#include <math.h>
#include <string.h>
#include <lualib.h>

#include "binding.h"
#include "guard.h"
#include "limits.h"
#include "plain.h"

#define STATE "entrefer.state"

int luaopen_entrefer_core(lua_State *L);

/* Everything one run holds; its userdata gives it back whatever happens. */
typedef struct {
  lua_State *state;
  efl_limits limits;
  efl_bytes in, out;
} isolated_run;

/* What the functions inside need of the run. Lives on the C stack of `isolated`. */
typedef struct {
  isolated_run *run;
  lua_State *L; /* the host's state, in which nothing may raise while the other one runs */
  int answer;   /* stack index there of the host's function, 0 for none */
  const char *name, *text;
  size_t size;
  int bare;
} isolated_job;

static void close_run(isolated_run *run) {
  lua_State *state = run->state;
  run->state = NULL;
  /* From here on nothing counts, and only functions of C run. */
  run->limits.state = NULL;
  if (state) {
    lua_sethook(state, NULL, 0, 0);
    lua_close(state);
  }
  efl_bytes_release(&run->in);
  efl_bytes_release(&run->out);
}

static int release(lua_State *L) {
  isolated_run *run = luaL_checkudata(L, 1, STATE);
  close_run(run);
  return 0;
}

typedef struct {
  const char *what, *argument;
  size_t size;
} question;

/* In the host, protected: function, question -> its two results. */
static int relay(lua_State *L) {
  const question *q = lua_touserdata(L, 2);
  lua_settop(L, 1);
  lua_pushstring(L, q->what);
  lua_pushlstring(L, q->argument, q->size);
  lua_call(L, 2, 2);
  return 2;
}

/* Inside: ask(what, argument) -> text, or nil and a sentence. The only way out of the state. */
static int ask(lua_State *S) {
  isolated_job *job = lua_touserdata(S, lua_upvalueindex(1));
  question q = {.what = luaL_checkstring(S, 1)};
  q.argument = luaL_checklstring(S, 2, &q.size);
  lua_State *L = job->L;
  if (!lua_checkstack(L, 8)) return luaL_error(S, "the host's stack is full");
  int top = lua_gettop(L);
  lua_pushcfunction(L, relay);
  lua_pushvalue(L, job->answer);
  lua_pushlightuserdata(L, &q);
  int status = lua_pcall(L, 2, 2, 0);
  /* Text stays where it is while the host's stack holds it; `isolated` takes it off after an error
   * in here. */
  size_t size;
  if (status == LUA_OK && lua_type(L, -2) == LUA_TSTRING) {
    const char *text = lua_tolstring(L, -2, &size);
    lua_pushlstring(S, text, size);
    lua_settop(L, top);
    return 1;
  }
  lua_pushnil(S);
  if (lua_type(L, -1) == LUA_TSTRING)
    lua_pushstring(S, lua_tostring(L, -1));
  else
    lua_pushliteral(S, "the host could not answer");
  lua_settop(L, top);
  return 2;
}

/* The libraries that hold nothing of the outside, with guards for what could run or grow for ever.
 */
static void open_libraries(lua_State *S) {
  luaL_requiref(S, LUA_GNAME, luaopen_base, 1);
  lua_pushcfunction(S, efl_tostring);
  lua_setfield(S, -2, "tostring");
  luaL_requiref(S, LUA_STRLIBNAME, luaopen_string, 1);
  efl_guard_patterns(S);
  efl_guard_strings(S);
  luaL_requiref(S, LUA_TABLIBNAME, luaopen_table, 1);
  efl_guard_tables(S);
  luaL_requiref(S, LUA_UTF8LIBNAME, luaopen_utf8, 1);
  luaL_requiref(S, LUA_MATHLIBNAME, luaopen_math, 1);
  /* Lua seeds from the clock and an address. */
  lua_getfield(S, -1, "randomseed");
  lua_pushinteger(S, 0);
  lua_call(S, 1, 0);
  luaL_getsubtable(S, LUA_REGISTRYINDEX, LUA_LOADED_TABLE);
  lua_pushcfunction(S, luaopen_entrefer_core);
  lua_call(S, 0, 1);
  lua_setfield(S, -2, "entrefer.core");
  lua_setglobal(S, "loaded");
}

/* Inside, protected: the whole run. */
static int run_inside(lua_State *S) {
  isolated_job *job = lua_touserdata(S, 1);
  lua_settop(S, 0);
  if (!job->bare) {
    open_libraries(S);
    lua_settop(S, 0);
  }
  if (luaL_loadbufferx(S, job->text, job->size, job->name, "t") != LUA_OK) return lua_error(S);
  efl_plain_read(S, job->run->in.bytes, job->run->in.count);
  if (job->answer) {
    lua_pushlightuserdata(S, job);
    lua_pushcclosure(S, ask, 1);
  } else {
    lua_pushnil(S);
  }
  lua_call(S, 2, 1);
  const char *problem = efl_plain_write(S, -1, &job->run->out);
  if (problem) return luaL_error(S, "the result can't be handed over: %s", problem);
  return 0;
}

/* Copies the text in field `name` of the error table at the top of S, if there is one. */
static const char *error_field(lua_State *L, lua_State *S, const char *name) {
  /* The table may be anything: raw access by a walk, which neither raises nor allocates. */
  const char *found = NULL;
  for (lua_pushnil(S); !found && lua_next(S, -2); lua_pop(S, 1)) {
    if (lua_type(S, -2) == LUA_TSTRING && lua_type(S, -1) == LUA_TSTRING &&
        strcmp(lua_tostring(S, -2), name) == 0)
      found = lua_pushfstring(L, "%s", lua_tostring(S, -1));
  }
  if (found) lua_pop(S, 1);
  return found;
}

/* Pushes the limit that ended the run, if one did. */
static int push_limit(lua_State *L, const efl_limits *limits, const char *name, int no_memory) {
  const char *field, *allowed;
  if (limits->exceeded == EFL_STEPS) {
    field = "instructions";
    allowed = lua_pushfstring(L, "%I instructions", (LUAI_UACINT)limits->most_steps);
  } else if (limits->exceeded == EFL_SECONDS) {
    field = "seconds";
    allowed = lua_pushfstring(L, "%f s of processor time", (LUAI_UACNUMBER)limits->most_seconds);
  } else if (no_memory) {
    field = "memory";
    allowed = lua_pushfstring(L, "%I KiB, %I KiB in one text", (LUAI_UACINT)(limits->most / 1024),
                              (LUAI_UACINT)(limits->longest / 1024));
  } else {
    return 0;
  }
  efl_push_error(L, "limit", field,
                 lua_pushfstring(L, "%s %s; allowed: %s", name,
                                 limits->exceeded ? "runs too long" : "needs too much memory",
                                 allowed));
  return 1;
}

/* Pushes the error on the top of the other state, as one of L. */
static void push_error_of(lua_State *L, const isolated_job *job, int status) {
  lua_State *S = job->run->state;
  const efl_limits *limits = &job->run->limits;
  const char *name = job->name + 1;
  const char *text = lua_type(S, -1) == LUA_TSTRING ? lua_tostring(S, -1) : NULL;
  int no_memory =
      status == LUA_ERRMEM || (limits->refused && text && strstr(text, "not enough memory"));
  if (push_limit(L, limits, name, no_memory)) return;
  if (text) {
    efl_push_error(L, "error", name, text);
    return;
  }
  const char *message = NULL, *code = NULL, *field = NULL;
  if (lua_type(S, -1) == LUA_TTABLE && lua_checkstack(S, 4)) {
    message = error_field(L, S, "message");
    code = error_field(L, S, "code");
    field = error_field(L, S, "field");
  }
  if (!message)
    message = lua_pushfstring(L, "%s raised an error that is a %s without a message", name,
                              lua_typename(S, lua_type(S, -1)));
  efl_push_error(L, code ? code : "error", field ? field : name, message);
}

/* Field `name` of the spec as a number above 0. */
static double positive(lua_State *L, const char *name, double most) {
  double value = efl_number(L, 1, "", name);
  if (!(value > 0 && value <= most))
    efl_raise_value(L, name, value, lua_pushfstring(L, "above 0, at most %f", most));
  return value;
}

static isolated_run *new_run(lua_State *L) {
  isolated_run *run = lua_newuserdatauv(L, sizeof *run, 0);
  memset(run, 0, sizeof *run);
  luaL_setmetatable(L, STATE);
  efl_limits *limits = &run->limits;
  limits->parent = lua_getallocf(L, &limits->parent_user);
  limits->most = (size_t)positive(L, "memory", 1e12);
  limits->longest = limits->most / 16;
  limits->most_steps = (uint64_t)positive(L, "instructions", 1e15);
  limits->most_seconds = positive(L, "seconds", 1e9);
  run->in = run->out = (efl_bytes){.resize = limits->parent, .user = limits->parent_user};
  run->in.most = (size_t)1 << 40;
  run->out.most = (size_t)positive(L, "result", 1e9);
  return run;
}

/* core.isolated{ text=, name=, request=, answer=, bare=, memory=, instructions=, seconds=, result=
 * }
 * -> what the text returns.
 * text: Lua source, called as a chunk with the request (plain data) and, when `answer` is given, a
 *   function ask(what, argument); bare: no libraries at all, not even methods of text.
 * answer(what, argument): the host's function; returns text, or nil and a sentence.
 * memory, result: most bytes; instructions; seconds: of processor time.
 * Raises what went wrong as an error table; code "limit" when a limit was reached. */
static int isolated(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  lua_settop(L, 1);
  isolated_job job = {.L = L};
  lua_getfield(L, 1, "text");
  job.text = luaL_checklstring(L, -1, &job.size);
  lua_getfield(L, 1, "name");
  job.name = lua_pushfstring(L, "=%s", luaL_checkstring(L, -1));
  if (lua_getfield(L, 1, "answer") == LUA_TFUNCTION) job.answer = lua_gettop(L);
  lua_getfield(L, 1, "bare");
  job.bare = lua_toboolean(L, -1);
  isolated_run *run = job.run = new_run(L);
  int anchor = lua_gettop(L);
  lua_getfield(L, 1, "request");
  const char *problem = efl_plain_write(L, -1, &run->in);
  if (problem)
    return efl_raise_text(L, "request",
                          lua_pushfstring(L, "the inputs can't be handed over: %s", problem));
  run->state = lua_newstate(efl_limited_resize, &run->limits);
  if (!run->state)
    return efl_raise_value(L, "memory", (double)run->limits.most, "enough bytes for a new state");
  efl_limits_watch(&run->limits, run->state);
  lua_pushcfunction(run->state, run_inside);
  lua_pushlightuserdata(run->state, &job);
  int status = lua_pcall(run->state, 1, 0, 0);
  lua_settop(L, anchor);
  efl_charge(L, run->limits.steps);
  if (status == LUA_OK)
    efl_plain_read(L, run->out.bytes, run->out.count);
  else
    push_error_of(L, &job, status);
  close_run(run);
  return status == LUA_OK ? 1 : lua_error(L);
}

void efl_open_state(lua_State *L) {
  luaL_newmetatable(L, STATE);
  lua_pushcfunction(L, release);
  lua_setfield(L, -2, "__gc");
  lua_pushliteral(L, "protected");
  lua_setfield(L, -2, "__metatable");
  lua_pop(L, 1);
  lua_pushcfunction(L, isolated);
  lua_setfield(L, -2, "isolated");
}
