#include "plain.h"

#include <string.h>
#include <lauxlib.h>

enum {
  NIL = '0',
  FALSE = 'f',
  TRUE = 't',
  INTEGER = 'i',
  NUMBER = 'n',
  TEXT = 's',
  OPEN = '{',
  SHUT = '}'
};

static const char too_much[] = "it holds more than the limit on what a run may hand over";

void efl_bytes_release(efl_bytes *self) {
  if (self->bytes) self->resize(self->user, self->bytes, self->room, 0);
  self->bytes = NULL;
  self->count = self->room = 0;
}

const char *efl_bytes_append(efl_bytes *to, const void *data, size_t size) {
  if (to->count > to->most || size > to->most - to->count) return too_much;
  if (size > to->room - to->count) {
    size_t room = 2 * to->room + size + 256;
    unsigned char *bytes = to->resize(to->user, to->bytes, to->room, room);
    if (!bytes) return "there is no memory left to hand it over";
    to->bytes = bytes;
    to->room = room;
  }
  memcpy(to->bytes + to->count, data, size);
  to->count += size;
  return NULL;
}

static const char *append_tagged(efl_bytes *to, int tag, const void *data, size_t size) {
  unsigned char byte = (unsigned char)tag;
  const char *problem = efl_bytes_append(to, &byte, 1);
  return problem ? problem : efl_bytes_append(to, data, size);
}

static const char *write_text(lua_State *L, int index, efl_bytes *to) {
  size_t size;
  const char *text = lua_tolstring(L, index, &size);
  const char *problem = append_tagged(to, TEXT, &size, sizeof size);
  return problem ? problem : efl_bytes_append(to, text, size);
}

static const char *write_number(lua_State *L, int index, efl_bytes *to) {
  if (lua_isinteger(L, index)) {
    lua_Integer value = lua_tointeger(L, index);
    return append_tagged(to, INTEGER, &value, sizeof value);
  }
  lua_Number value = lua_tonumber(L, index);
  return append_tagged(to, NUMBER, &value, sizeof value);
}

/* Recursion down to EFL_PLAIN_DEPTH. NOLINTBEGIN(misc-no-recursion) */
static const char *write_value(lua_State *L, int index, int depth, efl_bytes *to);

static const char *write_table(lua_State *L, int index, int depth, efl_bytes *to) {
  if (depth == 0) return "it holds itself, or tables more than 32 deep";
  if (!lua_checkstack(L, 6)) return "there is no memory left to hand it over";
  if (lua_getmetatable(L, index)) {
    lua_pop(L, 1);
    return "it holds an object; allowed: numbers, text, booleans and tables of those";
  }
  const char *problem = efl_bytes_append(to, &(unsigned char){OPEN}, 1);
  lua_pushnil(L);
  while (!problem && lua_next(L, index)) {
    int key = lua_gettop(L) - 1;
    if (lua_type(L, key) != LUA_TSTRING && lua_type(L, key) != LUA_TNUMBER)
      problem = "it holds a table whose key is neither text nor a number";
    if (!problem) problem = write_value(L, key, depth - 1, to);
    if (!problem) problem = write_value(L, key + 1, depth - 1, to);
    lua_settop(L, key);
  }
  return problem ? problem : efl_bytes_append(to, &(unsigned char){SHUT}, 1);
}

static const char *write_value(lua_State *L, int index, int depth, efl_bytes *to) {
  switch (lua_type(L, index)) {
  case LUA_TNIL:
    return efl_bytes_append(to, &(unsigned char){NIL}, 1);
  case LUA_TBOOLEAN:
    return efl_bytes_append(to, &(unsigned char){lua_toboolean(L, index) ? TRUE : FALSE}, 1);
  case LUA_TNUMBER:
    return write_number(L, index, to);
  case LUA_TSTRING:
    return write_text(L, index, to);
  case LUA_TTABLE:
    return write_table(L, index, depth, to);
  default:
    return "it holds a function or an object; allowed: numbers, text, booleans and tables of those";
  }
}

/* NOLINTEND(misc-no-recursion) */

const char *efl_plain_write(lua_State *L, int index, efl_bytes *to) {
  int top = lua_gettop(L);
  const char *problem = write_value(L, lua_absindex(L, index), EFL_PLAIN_DEPTH, to);
  lua_settop(L, top);
  return problem;
}

typedef struct {
  const unsigned char *at, *end;
} reader;

static void take(lua_State *L, reader *from, void *to, size_t size) {
  if (size > (size_t)(from->end - from->at)) luaL_error(L, "the data handed over are damaged");
  memcpy(to, from->at, size);
  from->at += size;
}

static void read_text(lua_State *L, reader *from) {
  size_t size;
  take(L, from, &size, sizeof size);
  if (size > (size_t)(from->end - from->at)) luaL_error(L, "the data handed over are damaged");
  lua_pushlstring(L, (const char *)from->at, size);
  from->at += size;
}

static void read_number(lua_State *L, reader *from) {
  lua_Number value;
  take(L, from, &value, sizeof value);
  lua_pushnumber(L, value);
}

static void read_integer(lua_State *L, reader *from) {
  lua_Integer value;
  take(L, from, &value, sizeof value);
  lua_pushinteger(L, value);
}

/* The same depth. NOLINTBEGIN(misc-no-recursion) */
static void read_value(lua_State *L, reader *from, int depth);

static void read_table(lua_State *L, reader *from, int depth) {
  if (depth == 0) luaL_error(L, "the data handed over are damaged");
  luaL_checkstack(L, 6, NULL);
  lua_newtable(L);
  while (from->at < from->end && *from->at != SHUT) {
    read_value(L, from, depth - 1);
    if (lua_type(L, -1) != LUA_TSTRING &&
        (lua_type(L, -1) != LUA_TNUMBER || lua_tonumber(L, -1) != lua_tonumber(L, -1)))
      luaL_error(L, "the data handed over are damaged");
    read_value(L, from, depth - 1);
    lua_rawset(L, -3);
  }
  unsigned char shut;
  take(L, from, &shut, 1);
}

static void read_value(lua_State *L, reader *from, int depth) {
  unsigned char tag;
  take(L, from, &tag, 1);
  switch (tag) {
  case NIL:
    lua_pushnil(L);
    break;
  case FALSE:
  case TRUE:
    lua_pushboolean(L, tag == TRUE);
    break;
  case INTEGER:
    read_integer(L, from);
    break;
  case NUMBER:
    read_number(L, from);
    break;
  case TEXT:
    read_text(L, from);
    break;
  case OPEN:
    read_table(L, from, depth);
    break;
  default:
    luaL_error(L, "the data handed over are damaged");
  }
}

/* NOLINTEND(misc-no-recursion) */

void efl_plain_read(lua_State *L, const unsigned char *bytes, size_t count) {
  reader from = {bytes, bytes + count};
  read_value(L, &from, EFL_PLAIN_DEPTH);
}
