/* network:sensitivity{ elements = { { element=, length=, area=, bypass=, permeance=, stretch= } },
 * turns = { [branch] = { [winding] = change } } } -> { linkage = {}, incremental = matrix,
 * flux = {}, flux_density = {}, drop = {}, energy =, coenergy = } */
#include "binding.h"
#include "network_userdata.h"

static void read_change(lua_State *L, ef_element_change *change) {
  int table = lua_gettop(L);
  change->element = efl_count(L, table, "change ", "element", 1000000) - 1;
  change->length = efl_number_or(L, table, "change ", "length", 0);
  change->area = efl_number_or(L, table, "change ", "area", 0);
  change->bypass = efl_number_or(L, table, "change ", "bypass", 0);
  change->permeance = efl_number_or(L, table, "change ", "permeance", 0);
  change->stretch = efl_number_or(L, table, "change ", "stretch", 0);
}

/* Change of turns per coupling, in the order of the network's own couplings. */
static double *read_turns(lua_State *L, efl_network *self, size_t *count) {
  int given = lua_getfield(L, 2, "turns") == LUA_TTABLE;
  efl_check_network(L); /* a metamethod of the arguments may have closed it */
  const ef_turns *coupling;
  *count = ef_network_couplings(self->network, &coupling);
  if (!given) {
    lua_pop(L, 1);
    return NULL;
  }
  int table = lua_gettop(L);
  double *change = lua_newuserdatauv(L, (*count + 1) * sizeof *change, 0);
  for (size_t i = 0; i < *count; i++) {
    change[i] = 0;
    if (lua_rawgeti(L, table, (lua_Integer)coupling[i].branch + 1) == LUA_TTABLE) {
      lua_rawgeti(L, -1, (lua_Integer)coupling[i].winding + 1);
      change[i] = lua_tonumber(L, -1);
      lua_pop(L, 1);
    }
    lua_pop(L, 1);
  }
  return change;
}

static void push_list(lua_State *L, const char *name, size_t count, const double *values) {
  lua_createtable(L, (int)count, 0);
  for (size_t i = 0; i < count; i++) {
    lua_pushnumber(L, values[i]);
    lua_rawseti(L, -2, (lua_Integer)i + 1);
  }
  lua_setfield(L, -2, name);
}

int efl_network_sensitivity(lua_State *L) {
  efl_network *self = efl_check_network(L);
  luaL_checktype(L, 2, LUA_TTABLE);
  lua_settop(L, 2);
  ef_direction direction = {0};
  if (lua_getfield(L, 2, "elements") == LUA_TTABLE) direction.elements = lua_rawlen(L, -1);
  ef_element_change *changes = lua_newuserdatauv(L, (direction.elements + 1) * sizeof *changes, 0);
  for (size_t i = 0; i < direction.elements; i++) {
    lua_rawgeti(L, 3, (lua_Integer)i + 1);
    luaL_checktype(L, -1, LUA_TTABLE);
    read_change(L, &changes[i]);
    lua_pop(L, 1);
  }
  direction.element = changes;
  direction.turns = read_turns(L, self, &direction.couplings);
  size_t w = self->windings, e = self->elements;
  double *out = lua_newuserdatauv(L, (w + w * w + 3 * e + 1) * sizeof *out, 0);
  ef_sensitivity result = {.linkage = out, .incremental = out + w, .flux = out + w + w * w};
  result.flux_density = result.flux + e;
  result.drop = result.flux_density + e;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_network_sensitivity(&context, self->network, &direction, &result);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_createtable(L, 0, 7);
  push_list(L, "linkage", w, result.linkage);
  push_list(L, "incremental", w * w, result.incremental);
  push_list(L, "flux", e, result.flux);
  push_list(L, "flux_density", e, result.flux_density);
  push_list(L, "drop", e, result.drop);
  efl_set_number(L, "energy", result.energy);
  efl_set_number(L, "coenergy", result.coenergy);
  return 1;
}
