/* core.root(f, low, high) -> x with f(x) = 0. f returns its value and, if it likes, its derivative.
 */
#include <math.h>

#include "binding.h"

typedef struct {
  lua_State *L;
  int failed; /* the error is then on the top of the stack */
} callback;

static void call_function(void *user, double x, double *value, double *derivative) {
  callback *c = user;
  *value = *derivative = NAN;
  if (c->failed) return;
  lua_pushvalue(c->L, 1);
  lua_pushnumber(c->L, x);
  if (lua_pcall(c->L, 1, 2, 0) != LUA_OK) {
    c->failed = 1;
    return;
  }
  if (lua_type(c->L, -2) == LUA_TNUMBER) *value = lua_tonumber(c->L, -2);
  if (lua_type(c->L, -1) == LUA_TNUMBER) *derivative = lua_tonumber(c->L, -1);
  lua_pop(c->L, 2);
}

static int find_root(lua_State *L) {
  luaL_checkany(L, 1);
  double low = luaL_checknumber(L, 2), high = luaL_checknumber(L, 3), root = 0;
  callback c = {L, 0};
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_root(&context, call_function, &c, low, high, &root);
  if (c.failed) return lua_error(L);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, root);
  return 1;
}

void efl_open_root(lua_State *L) {
  lua_pushcfunction(L, find_root);
  lua_setfield(L, -2, "root");
}
