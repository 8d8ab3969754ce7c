#include "binding.h"
#include "limits.h"

#include <math.h>

static void *resize_with_lua(void *user, void *block, size_t old_size, size_t new_size) {
  lua_State *L = user;
  void *lua_user = NULL;
  lua_Alloc allocate = lua_getallocf(L, &lua_user);
  return allocate(lua_user, block, old_size, new_size);
}

/* In an isolated state a long solve ends when the state's time is up. */
static int stop_when_late(void *user, double share) {
  (void)share;
  return efl_limits_late(user);
}

void efl_context(lua_State *L, ef_context *context) {
  ef_context_init(context);
  context->allocator.resize = resize_with_lua;
  context->allocator.user = L;
  efl_limits *limits = efl_limits_of(L);
  if (!limits) return;
  context->progress = stop_when_late;
  context->progress_user = limits;
}

static int error_to_string(lua_State *L) {
  lua_getfield(L, 1, "message");
  return 1;
}

static void push_error(lua_State *L, const char *code, const char *field, double value,
                       const char *allowed, const char *message) {
  lua_createtable(L, 0, 5);
  efl_set_string(L, "code", code);
  if (field && *field) efl_set_string(L, "field", field);
  if (isfinite(value)) efl_set_number(L, "value", value);
  if (allowed && *allowed) efl_set_string(L, "allowed", allowed);
  efl_set_string(L, "message", message);
  if (luaL_newmetatable(L, "entrefer.error")) {
    lua_pushcfunction(L, error_to_string);
    lua_setfield(L, -2, "__tostring");
    efl_set_string(L, "__name", "entrefer.error");
  }
  lua_setmetatable(L, -2);
}

int efl_raise(lua_State *L, ef_status status, const ef_context *context) {
  push_error(L, ef_status_name(status), context->field, context->value, context->allowed,
             context->message);
  return lua_error(L);
}

int efl_raise_value(lua_State *L, const char *field, double value, const char *allowed) {
  ef_context context;
  ef_context_init(&context);
  return efl_raise(L, ef_fail(&context, EF_BAD_VALUE, field, value, allowed), &context);
}

void efl_push_error(lua_State *L, const char *code, const char *field, const char *message) {
  push_error(L, code, field, NAN, NULL, message);
}

int efl_raise_text(lua_State *L, const char *field, const char *message) {
  push_error(L, ef_status_name(EF_BAD_VALUE), field, NAN, NULL, message);
  return lua_error(L);
}

static double checked_number(lua_State *L, const char *what, const char *name) {
  int is_number = 0;
  double value = lua_tonumberx(L, -1, &is_number);
  if (lua_type(L, -1) != LUA_TNUMBER || !is_number || !isfinite(value)) {
    const char *field = lua_pushfstring(L, "%s%s", what, name);
    const char *shown = luaL_tolstring(L, -2, NULL);
    efl_raise_text(L, field,
                   lua_pushfstring(L, "%s is %s; allowed: a finite number", field, shown));
  }
  lua_pop(L, 1);
  return value;
}

double efl_number(lua_State *L, int index, const char *what, const char *name) {
  lua_getfield(L, index, name);
  return checked_number(L, what, name);
}

double efl_number_or(lua_State *L, int index, const char *what, const char *name,
                     double otherwise) {
  if (lua_getfield(L, index, name) == LUA_TNIL) {
    lua_pop(L, 1);
    return otherwise;
  }
  return checked_number(L, what, name);
}

size_t efl_count(lua_State *L, int index, const char *what, const char *name, size_t most) {
  double value = efl_number(L, index, what, name);
  if (value < 0 || value > (double)most || value != floor(value)) {
    const char *field = lua_pushfstring(L, "%s%s", what, name);
    efl_raise_value(L, field, value, lua_pushfstring(L, "a whole number from 0 to %d", (int)most));
  }
  return (size_t)value;
}

double *efl_numbers(lua_State *L, int index, const char *name, size_t *count) {
  index = lua_absindex(L, index);
  if (lua_getfield(L, index, name) != LUA_TTABLE)
    efl_raise_text(L, name, lua_pushfstring(L, "%s is missing; allowed: a list of numbers", name));
  *count = (size_t)lua_rawlen(L, -1);
  double *values = lua_newuserdatauv(L, (*count + 1) * sizeof *values, 0);
  for (size_t i = 0; i < *count; i++) {
    lua_rawgeti(L, -2, (lua_Integer)i + 1);
    if (lua_type(L, -1) != LUA_TNUMBER)
      efl_raise_text(L, name,
                     lua_pushfstring(L, "entry %d of %s is no number; allowed: numbers only",
                                     (int)i + 1, name));
    values[i] = lua_tonumber(L, -1);
    lua_pop(L, 1);
  }
  lua_remove(L, -2);
  return values;
}

void efl_set_number(lua_State *L, const char *name, double value) {
  lua_pushnumber(L, value);
  lua_setfield(L, -2, name);
}

void efl_set_boolean(lua_State *L, const char *name, int value) {
  lua_pushboolean(L, value);
  lua_setfield(L, -2, name);
}

void efl_set_string(lua_State *L, const char *name, const char *value) {
  lua_pushstring(L, value);
  lua_setfield(L, -2, name);
}

void efl_class(lua_State *L, const char *name, const luaL_Reg *metamethods,
               const luaL_Reg *methods) {
  luaL_newmetatable(L, name);
  if (metamethods) luaL_setfuncs(L, metamethods, 0);
  lua_newtable(L);
  luaL_setfuncs(L, methods, 0);
  lua_setfield(L, -2, "__index");
  lua_pushliteral(L, "protected");
  lua_setfield(L, -2, "__metatable");
  lua_pop(L, 1);
}
