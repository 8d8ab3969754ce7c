/* Materials and their laws: core.material, core.fit_law; userdata entrefer.material, entrefer.law.
 */
#include <string.h>

#include "binding.h"
#include "law_userdata.h"

#define MATERIAL "entrefer.material"

static const char *const law_names[] = {"linear", "froelich", "langevin", "curve", NULL};

static ef_material **check_material(lua_State *L) {
  return luaL_checkudata(L, 1, MATERIAL);
}

static void read_curve(lua_State *L, int index, ef_law_kind kind, ef_material_curve *curve) {
  curve->temperature = efl_number(L, index, "curve ", "temperature");
  curve->initial_permeability = efl_number_or(L, index, "curve ", "initial_permeability", 0);
  curve->saturation = efl_number_or(L, index, "curve ", "saturation", 0);
  curve->count = 0;
  if (kind != EF_LAW_CURVE) return;
  size_t fields, densities;
  curve->h = efl_numbers(L, index, "h", &fields);
  curve->b = efl_numbers(L, index, "b", &densities);
  if (fields != densities)
    efl_raise_value(L, "number of flux densities of a curve", (double)densities,
                    "as many as field strengths");
  curve->count = fields;
}

static int material_create(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  lua_getfield(L, 1, "kind");
  ef_law_kind kind = (ef_law_kind)luaL_checkoption(L, -1, NULL, law_names);
  if (lua_getfield(L, 1, "curves") != LUA_TTABLE)
    efl_raise_text(L, "curves", "curves is missing; allowed: a list of curves");
  int list = lua_gettop(L);
  size_t count = (size_t)lua_rawlen(L, list);
  ef_material_curve *curves = lua_newuserdatauv(L, (count + 1) * sizeof *curves, 0);
  memset(curves, 0, (count + 1) * sizeof *curves);
  ef_material **material = lua_newuserdatauv(L, sizeof(ef_material *), 0);
  *material = NULL;
  luaL_setmetatable(L, MATERIAL);
  int result = lua_gettop(L);
  luaL_checkstack(L, (int)(2 * count) + 20, "too many curves");
  for (size_t i = 0; i < count; i++) {
    if (lua_rawgeti(L, list, (lua_Integer)i + 1) != LUA_TTABLE)
      efl_raise_text(L, "curves", "an entry of curves is no table; allowed: a list of curves");
    read_curve(L, lua_gettop(L), kind, &curves[i]);
  }
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_material_create(&context, kind, count, curves, material);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushvalue(L, result);
  return 1;
}

static int material_release(lua_State *L) {
  ef_material **material = check_material(L);
  ef_context context;
  efl_context(L, &context);
  ef_material_release(&context, *material);
  *material = NULL;
  return 0;
}

/* material:law(temperature) -> law */
static int material_law(lua_State *L) {
  ef_material **material = check_material(L);
  double temperature = luaL_checknumber(L, 2);
  if (!*material) return efl_raise_text(L, "material", "the material is closed");
  size_t size = sizeof(efl_law) + ef_material_law_size(*material) * sizeof(double);
  efl_law *law = lua_newuserdatauv(L, size, 0);
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_material_law(&context, *material, temperature, law->storage, &law->law);
  if (status != EF_OK) return efl_raise(L, status, &context);
  luaL_setmetatable(L, EFL_LAW);
  return 1;
}

/* law:at(h) -> flux density, differential permeability (both absolute), polarisation */
static int law_at(lua_State *L) {
  const efl_law *law = luaL_checkudata(L, 1, EFL_LAW);
  double h = luaL_checknumber(L, 2);
  size_t hint = 0;
  ef_law_point p = ef_law_at(&law->law, h, &hint);
  lua_pushnumber(L, p.polarisation + EF_MU0 * h);
  lua_pushnumber(L, p.slope + EF_MU0);
  lua_pushnumber(L, p.polarisation);
  return 3;
}

/* law:field(flux density) -> field strength */
static int law_field(lua_State *L) {
  const efl_law *law = luaL_checkudata(L, 1, EFL_LAW);
  double h = 0;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_law_field(&context, &law->law, luaL_checknumber(L, 2), &h);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, h);
  return 1;
}

/* law:coenergy(h) -> J/m3 of the polarisation; law:curvature(h) -> d2B/dH2 */
static int law_coenergy(lua_State *L) {
  const efl_law *law = luaL_checkudata(L, 1, EFL_LAW);
  lua_pushnumber(L, ef_law_coenergy(&law->law, luaL_checknumber(L, 2)));
  return 1;
}

static int law_curvature(lua_State *L) {
  const efl_law *law = luaL_checkudata(L, 1, EFL_LAW);
  lua_pushnumber(L, ef_law_curvature(&law->law, luaL_checknumber(L, 2)));
  return 1;
}

/* law:saturation() -> Js; law:permeability() -> initial relative permeability */
static int law_saturation(lua_State *L) {
  const efl_law *law = luaL_checkudata(L, 1, EFL_LAW);
  lua_pushnumber(L, law->law.saturation);
  return 1;
}

static int law_permeability(lua_State *L) {
  const efl_law *law = luaL_checkudata(L, 1, EFL_LAW);
  lua_pushnumber(L, law->law.susceptibility + 1);
  return 1;
}

/* core.fit_law(kind, h, b) -> initial relative permeability, Js, rms error */
static int fit_law(lua_State *L) {
  ef_law_kind kind = (ef_law_kind)luaL_checkoption(L, 1, NULL, law_names);
  lua_createtable(L, 0, 2);
  lua_pushvalue(L, 2);
  lua_setfield(L, -2, "h");
  lua_pushvalue(L, 3);
  lua_setfield(L, -2, "b");
  int table = lua_gettop(L);
  size_t fields, densities;
  double *h = efl_numbers(L, table, "h", &fields), *b = efl_numbers(L, table, "b", &densities);
  if (fields != densities)
    efl_raise_value(L, "number of flux densities", (double)densities, "as many as field strengths");
  ef_law law;
  double rms;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_law_fit(&context, kind, fields, h, b, &law, &rms);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, law.susceptibility + 1);
  lua_pushnumber(L, law.saturation);
  lua_pushnumber(L, rms);
  return 3;
}

void efl_open_material(lua_State *L) {
  static const luaL_Reg material_meta[] = {
      {"__gc", material_release}, {"__close", material_release}, {NULL, NULL}};
  static const luaL_Reg material_methods[] = {{"law", material_law}, {NULL, NULL}};
  static const luaL_Reg law_methods[] = {
      {"at", law_at},
      {"field", law_field},
      {"coenergy", law_coenergy},
      {"curvature", law_curvature},
      {"saturation", law_saturation},
      {"permeability", law_permeability},
      {NULL, NULL},
  };
  efl_class(L, MATERIAL, material_meta, material_methods);
  efl_class(L, EFL_LAW, NULL, law_methods);
  lua_pushcfunction(L, material_create);
  lua_setfield(L, -2, "material");
  lua_pushcfunction(L, fit_law);
  lua_setfield(L, -2, "fit_law");
}
