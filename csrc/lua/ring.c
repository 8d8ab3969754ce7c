/* Leakage of a gapped ring: core.ring_ladder. */
#include "binding.h"

#define LADDER "entrefer.ring_ladder"

/* Holds a ladder's arrays while Lua may raise. */
static int ladder_release(lua_State *L) {
  ef_context context;
  efl_context(L, &context);
  ef_ring_ladder_release(&context, luaL_checkudata(L, 1, LADDER));
  return 0;
}

static void set_array(lua_State *L, const char *name, const double *values, size_t count) {
  lua_createtable(L, (int)count, 0);
  for (size_t i = 0; i < count; i++) {
    lua_pushnumber(L, values[i]);
    lua_rawseti(L, -2, (lua_Integer)i + 1);
  }
  lua_setfield(L, -2, name);
}

static void push_ladder(lua_State *L, const ef_ring_ladder *ladder) {
  lua_createtable(L, 0, 9);
  efl_set_number(L, "count", (double)ladder->count);
  set_array(L, "angle", ladder->angle, ladder->count + 1);
  set_array(L, "leakage", ladder->leakage, ladder->count);
  efl_set_number(L, "face_permeance", ladder->face_permeance);
  efl_set_number(L, "face_by_length", ladder->face_by_length);
  efl_set_number(L, "centre_field", ladder->centre_field);
  efl_set_number(L, "radial_slope", ladder->radial_slope);
  efl_set_number(L, "axial_curvature", ladder->axial_curvature);
  efl_set_number(L, "error", ladder->error);
}

/***
Leakage ladder of a gapped ring.
@function ring_ladder
@tparam table ring outer_diameter, inner_diameter, height, gap in m; gaps = 1 (default) or 2
@tparam[opt=20] integer sectors 1 to 64, from a gap's face to the symmetry plane in the iron
@treturn table count; angle (count + 1, rad from the middle of the gap) and leakage (count, H);
face_permeance (H), face_by_length (H/m), centre_field (relative to mu0 u / gap), radial_slope
(1/m), axial_curvature (1/m2), error (relative)
@raise the field that is wrong, its value and what is allowed
*/
static int ring_ladder(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  lua_settop(L, 2);
  ef_ring_geometry ring = {efl_number(L, 1, "ring ", "outer_diameter"),
                           efl_number(L, 1, "ring ", "inner_diameter"),
                           efl_number(L, 1, "ring ", "height"), efl_number(L, 1, "", "gap"), 1};
  if (lua_getfield(L, 1, "gaps") != LUA_TNIL) ring.gaps = (int)efl_count(L, 1, "", "gaps", 2);
  lua_Integer sectors = luaL_optinteger(L, 2, 20);
  if (sectors < 1 || sectors > EF_MAX_RING_SECTORS)
    return efl_raise_value(L, "sectors", (double)sectors, "1 to 64");
  ef_ring_ladder *ladder = lua_newuserdatauv(L, sizeof *ladder, 0);
  *ladder = (ef_ring_ladder){0};
  luaL_setmetatable(L, LADDER);
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_ring_ladder_build(&context, &ring, (size_t)sectors, ladder);
  if (status != EF_OK) return efl_raise(L, status, &context);
  push_ladder(L, ladder);
  ef_ring_ladder_release(&context, ladder);
  return 1;
}

void efl_open_ring(lua_State *L) {
  static const luaL_Reg metamethods[] = {
      {"__gc", ladder_release}, {"__close", ladder_release}, {NULL, NULL}};
  static const luaL_Reg none[] = {{NULL, NULL}};
  efl_class(L, LADDER, metamethods, none);
  lua_pushcfunction(L, ring_ladder);
  lua_setfield(L, -2, "ring_ladder");
}
