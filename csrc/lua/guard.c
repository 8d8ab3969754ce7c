/* The other guarded functions. Each looks at the size of its work, counts it, and then calls the
 * original, which is its upvalue. */
#include <string.h>

#include "binding.h"
#include "guard.h"
#include "limits.h"

/* Entries of a list that one call may go through. The border of a table with holes can be anything
 * up to 2^62, whatever the table holds. */
#define MOST_ENTRIES ((lua_Integer)1 << 24)

static int call_original(lua_State *L) {
  return lua_tocfunction(L, lua_upvalueindex(1))(L);
}

int efl_tostring(lua_State *L) {
  luaL_checkany(L, 1);
  int kind = lua_type(L, 1);
  int addressed = kind == LUA_TTABLE || kind == LUA_TFUNCTION || kind == LUA_TUSERDATA ||
                  kind == LUA_TLIGHTUSERDATA || kind == LUA_TTHREAD;
  if (!addressed || luaL_getmetafield(L, 1, "__tostring") != LUA_TNIL) {
    luaL_tolstring(L, 1, NULL);
    return 1;
  }
  lua_pushstring(L, luaL_typename(L, 1));
  return 1;
}

static int guarded_rep(lua_State *L) {
  size_t size, separator = 0;
  luaL_checklstring(L, 1, &size);
  lua_Integer count = luaL_checkinteger(L, 2);
  luaL_optlstring(L, 3, "", &separator);
  size += separator;
  const efl_limits *limits = efl_limits_of(L);
  if (size > 0 && count > 0 && limits && (lua_Unsigned)count > limits->longest / size)
    return luaL_error(L, "the text would be longer than %d bytes", (int)limits->longest);
  if (count > 0) efl_charge(L, (uint64_t)count);
  return call_original(L);
}

static int guarded_format(lua_State *L) {
  size_t size;
  const char *text = luaL_checklstring(L, 1, &size), *end = text + size;
  for (; text < end; text++) {
    if (*text != '%') continue;
    text += 1 + strspn(text + 1, "-+ #0123456789.");
    if (*text == 'p') return luaL_error(L, "%%p is not offered: addresses differ from run to run");
  }
  efl_charge(L, size);
  for (int i = lua_gettop(L); i > 1; i--) {
    if (lua_type(L, i) == LUA_TSTRING || lua_type(L, i) == LUA_TNUMBER) continue;
    if (lua_isnil(L, i) || lua_isboolean(L, i)) continue;
    lua_pushcfunction(L, efl_tostring);
    lua_pushvalue(L, i);
    lua_call(L, 1, 1);
    lua_replace(L, i);
  }
  return call_original(L);
}

/* Counts the entries of the list at argument 1. */
static void charge_list(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  lua_Integer count = luaL_len(L, 1);
  if (count > MOST_ENTRIES)
    luaL_error(L, "the list is too long; allowed: %d entries", (int)MOST_ENTRIES);
  efl_charge(L, count > 0 ? (uint64_t)count : 0);
}

static int guarded_list(lua_State *L) {
  charge_list(L);
  return call_original(L);
}

/* insert and remove at the end move nothing. */
static int guarded_insert(lua_State *L) {
  if (lua_gettop(L) > 2) charge_list(L);
  return call_original(L);
}

static int guarded_remove(lua_State *L) {
  if (lua_gettop(L) > 1) charge_list(L);
  return call_original(L);
}

static void charge_range(lua_State *L, lua_Integer from, lua_Integer to) {
  if (to < from) return;
  lua_Unsigned count = (lua_Unsigned)to - (lua_Unsigned)from + 1u;
  if (count == 0 || count > (lua_Unsigned)MOST_ENTRIES)
    luaL_error(L, "the range is too long; allowed: %d entries", (int)MOST_ENTRIES);
  efl_charge(L, count);
}

static int guarded_move(lua_State *L) {
  charge_range(L, luaL_checkinteger(L, 2), luaL_checkinteger(L, 3));
  return call_original(L);
}

static int guarded_concat(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  lua_Integer last = lua_isnoneornil(L, 4) ? luaL_len(L, 1) : luaL_checkinteger(L, 4);
  charge_range(L, luaL_optinteger(L, 3, 1), last);
  return call_original(L);
}

/* The default order as a function of Lua, whose instructions are counted: comparing long texts
 * takes time. Upvalues: the original, that function. */
static int guarded_sort(lua_State *L) {
  charge_list(L);
  if (lua_isnoneornil(L, 2)) {
    lua_settop(L, 1);
    lua_pushvalue(L, lua_upvalueindex(2));
  }
  return call_original(L);
}

/* Replaces a function of the table on the top of the stack; it gets the original as upvalue. */
static void guard(lua_State *L, const char *name, lua_CFunction with) {
  lua_getfield(L, -1, name);
  lua_pushcclosure(L, with, 1);
  lua_setfield(L, -2, name);
}

void efl_guard_strings(lua_State *L) {
  lua_pushnil(L);
  lua_setfield(L, -2, "dump");
  guard(L, "rep", guarded_rep);
  guard(L, "format", guarded_format);
}

void efl_guard_tables(lua_State *L) {
  guard(L, "insert", guarded_insert);
  guard(L, "remove", guarded_remove);
  guard(L, "move", guarded_move);
  guard(L, "concat", guarded_concat);
  guard(L, "unpack", guarded_list);
  lua_getfield(L, -1, "sort");
  if (luaL_dostring(L, "return function(a, b) return a < b end") != LUA_OK) lua_error(L);
  lua_pushcclosure(L, guarded_sort, 2);
  lua_setfield(L, -2, "sort");
}
