/* string.find, match, gmatch and gsub on the counting matcher. */
#include <string.h>

#include "binding.h"
#include "guard.h"
#include "limits.h"
#include "pattern.h"

/* Of one call; about a fifth of a second. */
#define MOST_STEPS_OF_A_CALL 50000000u

static void start(lua_State *L, efl_pattern *m, int subject, int pattern) {
  size_t size;
  memset(m, 0, sizeof *m);
  m->subject = luaL_checklstring(L, subject, &size);
  m->subject_end = m->subject + size;
  m->pattern_end = luaL_checklstring(L, pattern, &size) + size;
  uint64_t left = efl_steps_left(L);
  m->most_steps = left < MOST_STEPS_OF_A_CALL ? left : MOST_STEPS_OF_A_CALL;
}

/* Counts the matcher's work so far into the state's and raises its problem. */
static void settle(lua_State *L, efl_pattern *m) {
  uint64_t steps = m->steps;
  m->steps = 0;
  m->most_steps -= steps < m->most_steps ? steps : m->most_steps;
  efl_charge(L, steps);
  if (m->problem) luaL_error(L, "%s", m->problem);
}

static void push_capture(lua_State *L, const efl_pattern *m, int i, const char *from,
                         const char *to) {
  if (i >= m->captures) {
    if (i > 0) luaL_error(L, "invalid capture index %%%d", i + 1);
    lua_pushlstring(L, from, (size_t)(to - from));
    return;
  }
  const efl_capture *c = &m->capture[i];
  if (c->size == EFL_UNFINISHED) luaL_error(L, "unfinished capture");
  if (c->size == EFL_POSITION)
    lua_pushinteger(L, c->start - m->subject + 1);
  else
    lua_pushlstring(L, c->start, (size_t)c->size);
}

/* All captures, or the whole match when there are none and `whole`. */
static int push_captures(lua_State *L, const efl_pattern *m, const char *from, const char *to,
                         int whole) {
  int count = m->captures == 0 && whole ? 1 : m->captures;
  luaL_checkstack(L, count, "too many captures");
  for (int i = 0; i < count; i++)
    push_capture(L, m, i, from, to);
  return count;
}

/* The place named by the optional argument, from 0; beyond the end when it is more than one beyond.
 */
static size_t read_start(lua_State *L, int index, size_t size) {
  lua_Integer place = luaL_optinteger(L, index, 1);
  if (place > 0) return (size_t)place - 1;
  if (place == 0 || place < -(lua_Integer)size) return 0;
  return size - (size_t)-place;
}

static int find_plain(lua_State *L, efl_pattern *m, const char *at) {
  size_t size;
  const char *text = lua_tolstring(L, 2, &size);
  const char *found = efl_pattern_find_plain(m, at, text, size);
  settle(L, m);
  if (!found) {
    lua_pushnil(L);
    return 1;
  }
  lua_pushinteger(L, found - m->subject + 1);
  lua_pushinteger(L, found - m->subject + (lua_Integer)size);
  return 2;
}

static int has_specials(const char *pattern, const char *end) {
  for (; pattern < end; pattern++)
    if (*pattern && strchr("^$*+?.([%-", *pattern)) return 1;
  return 0;
}

static int search(lua_State *L, int find) {
  efl_pattern m;
  start(L, &m, 1, 2);
  size_t size = (size_t)(m.subject_end - m.subject), from = read_start(L, 3, size);
  if (from > size) {
    lua_pushnil(L);
    return 1;
  }
  const char *at = m.subject + from, *pattern = lua_tostring(L, 2);
  if (find && (lua_toboolean(L, 4) || !has_specials(pattern, m.pattern_end)))
    return find_plain(L, &m, at);
  int anchored = *pattern == '^';
  const char *end;
  do {
    end = efl_pattern_match(&m, at, pattern + anchored);
    if (end || m.problem) break;
  } while (at++ < m.subject_end && !anchored);
  settle(L, &m);
  if (!end) {
    lua_pushnil(L);
    return 1;
  }
  if (!find) return push_captures(L, &m, at, end, 1);
  lua_pushinteger(L, at - m.subject + 1);
  lua_pushinteger(L, end - m.subject);
  return 2 + push_captures(L, &m, at, end, 0);
}

static int guarded_find(lua_State *L) {
  return search(L, 1);
}

static int guarded_match(lua_State *L) {
  return search(L, 0);
}

/* Upvalues: text, pattern, where to go on (from 0), end of the last match (-1: none). */
static int gmatch_next(lua_State *L) {
  efl_pattern m;
  start(L, &m, lua_upvalueindex(1), lua_upvalueindex(2));
  const char *at = m.subject + lua_tointeger(L, lua_upvalueindex(3)), *end = NULL;
  const char *pattern = lua_tostring(L, lua_upvalueindex(2));
  lua_Integer last = lua_tointeger(L, lua_upvalueindex(4));
  for (; at <= m.subject_end && !m.problem; at++) {
    end = efl_pattern_match(&m, at, pattern);
    if (end && end - m.subject != last) break;
    end = NULL;
  }
  settle(L, &m);
  if (!end) return 0;
  lua_pushinteger(L, end - m.subject);
  lua_copy(L, -1, lua_upvalueindex(3));
  lua_replace(L, lua_upvalueindex(4));
  return push_captures(L, &m, at, end, 1);
}

static int guarded_gmatch(lua_State *L) {
  size_t size;
  luaL_checklstring(L, 1, &size);
  luaL_checkstring(L, 2);
  size_t from = read_start(L, 3, size);
  lua_settop(L, 2);
  lua_pushinteger(L, (lua_Integer)(from > size ? size + 1 : from));
  lua_pushinteger(L, -1);
  lua_pushcclosure(L, gmatch_next, 4);
  return 1;
}

/* Adds the replacement text at argument 3 with its captures filled in. */
static void add_text(lua_State *L, luaL_Buffer *out, const efl_pattern *m, const char *from,
                     const char *to) {
  size_t size;
  const char *text = lua_tolstring(L, 3, &size), *end = text + size;
  for (; text < end; text++) {
    if (*text != '%') {
      luaL_addchar(out, *text);
      continue;
    }
    text++;
    if (*text == '%') {
      luaL_addchar(out, '%');
    } else if (*text == '0') {
      luaL_addlstring(out, from, (size_t)(to - from));
    } else if (*text >= '1' && *text <= '9') {
      push_capture(L, m, *text - '1', from, to);
      luaL_tolstring(L, -1, NULL);
      lua_remove(L, -2);
      luaL_addvalue(out);
    } else {
      luaL_error(L, "invalid use of '%%' in replacement string");
    }
  }
}

/* Adds what stands for one match; returns whether it was changed. */
static int add_replacement(lua_State *L, luaL_Buffer *out, const efl_pattern *m, const char *from,
                           const char *to) {
  switch (lua_type(L, 3)) {
  case LUA_TFUNCTION:
    lua_pushvalue(L, 3);
    lua_call(L, push_captures(L, m, from, to, 1), 1);
    break;
  case LUA_TTABLE:
    push_capture(L, m, 0, from, to);
    lua_gettable(L, 3);
    break;
  default:
    add_text(L, out, m, from, to);
    return 1;
  }
  if (!lua_toboolean(L, -1)) {
    lua_pop(L, 1);
    luaL_addlstring(out, from, (size_t)(to - from));
    return 0;
  }
  if (!lua_isstring(L, -1)) luaL_error(L, "invalid replacement value (a %s)", luaL_typename(L, -1));
  luaL_addvalue(out);
  return 1;
}

static int guarded_gsub(lua_State *L) {
  efl_pattern m;
  start(L, &m, 1, 2);
  int kind = lua_type(L, 3);
  luaL_argexpected(
      L, kind == LUA_TNUMBER || kind == LUA_TSTRING || kind == LUA_TFUNCTION || kind == LUA_TTABLE,
      3, "string/function/table");
  lua_Integer most = luaL_optinteger(L, 4, m.subject_end - m.subject + 1), count = 0;
  const char *pattern = lua_tostring(L, 2), *at = m.subject, *last = NULL;
  int anchored = *pattern == '^', changed = 0;
  luaL_Buffer out;
  luaL_buffinit(L, &out);
  while (count < most) {
    const char *end = efl_pattern_match(&m, at, pattern + anchored);
    if (end && end != last) {
      settle(L, &m);
      count++;
      changed |= add_replacement(L, &out, &m, at, end);
      at = last = end;
    } else {
      if (m.problem || at == m.subject_end) break;
      luaL_addchar(&out, *at++);
    }
    if (anchored) break;
  }
  settle(L, &m);
  luaL_addlstring(&out, at, (size_t)(m.subject_end - at));
  luaL_pushresult(&out);
  if (!changed) lua_pushvalue(L, 1);
  lua_pushinteger(L, count);
  return 2;
}

void efl_guard_patterns(lua_State *L) {
  static const luaL_Reg functions[] = {{"find", guarded_find},
                                       {"match", guarded_match},
                                       {"gmatch", guarded_gmatch},
                                       {"gsub", guarded_gsub},
                                       {NULL, NULL}};
  luaL_setfuncs(L, functions, 0);
}
