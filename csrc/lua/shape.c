/* Core shapes: core.shape, core.shape_letters, core.shape_families, core.shape_effective. */
#include <string.h>

#include "binding.h"

static ef_shape_family check_family(lua_State *L, int index) {
  const char *name = luaL_checkstring(L, index);
  luaL_Buffer known;
  luaL_buffinit(L, &known);
  for (ef_shape_family family = 0; family < EF_SHAPE_COUNT; family++) {
    if (strcmp(name, ef_shape_name(family)) == 0) return family;
    luaL_addstring(&known, family > 0 ? ", " : "");
    luaL_addstring(&known, ef_shape_name(family));
  }
  luaL_pushresult(&known);
  efl_raise_text(L, "shape",
                 lua_pushfstring(L, "shape is '%s'; allowed: %s", name, lua_tostring(L, -1)));
  return EF_SHAPE_COUNT;
}

static size_t bare_length(const char *letter) {
  return strcspn(letter, "?");
}

/* core.shape_families() -> list of names */
static int shape_families(lua_State *L) {
  lua_createtable(L, EF_SHAPE_COUNT, 0);
  for (ef_shape_family family = 0; family < EF_SHAPE_COUNT; family++) {
    lua_pushstring(L, ef_shape_name(family));
    lua_rawseti(L, -2, (lua_Integer)family + 1);
  }
  return 1;
}

/* core.shape_letters(family) -> list of letters; an optional one ends in '?' */
static int shape_letters(lua_State *L) {
  const char *const *letters = ef_shape_letters(check_family(L, 1));
  lua_newtable(L);
  for (size_t i = 0; letters[i]; i++) {
    lua_pushstring(L, letters[i]);
    lua_rawseti(L, -2, (lua_Integer)i + 1);
  }
  return 1;
}

static void push_section(lua_State *L, const char *name, ef_section section) {
  lua_createtable(L, 0, 2);
  efl_set_number(L, "length", section.length);
  efl_set_number(L, "area", section.area);
  lua_setfield(L, -2, name);
}

static void push_pole(lua_State *L, const char *name, const ef_pole *pole) {
  lua_createtable(L, 0, 5);
  efl_set_string(L, "shape", pole->shape == EF_POLE_ROUND ? "round" : "rectangle");
  efl_set_number(L, "width", pole->width);
  efl_set_number(L, "depth", pole->depth);
  efl_set_number(L, "hole", pole->hole);
  efl_set_number(L, "corner", pole->corner);
  lua_setfield(L, -2, name);
}

static void push_effective(lua_State *L, const ef_core_geometry *g) {
  efl_set_number(L, "c1", g->c1);
  efl_set_number(L, "c2", g->c2);
  efl_set_number(L, "effective_length", g->effective_length);
  efl_set_number(L, "effective_area", g->effective_area);
  efl_set_number(L, "effective_volume", g->effective_volume);
  efl_set_number(L, "minimum_area", g->minimum_area);
  efl_set_number(L, "iron_volume", g->iron_volume);
}

static void push_geometry(lua_State *L, const ef_core_geometry *g) {
  static const char *const topologies[] = {"ring", "two_leg", "three_leg"};
  lua_createtable(L, 0, 32);
  efl_set_string(L, "family", ef_shape_name(g->family));
  efl_set_string(L, "topology", topologies[g->topology]);
  push_section(L, "centre_leg", g->centre_leg);
  push_section(L, "outer_leg", g->outer_leg);
  push_section(L, "yoke", g->yoke);
  push_section(L, "centre_corner", g->centre_corner);
  push_section(L, "outer_corner", g->outer_corner);
  push_pole(L, "centre_pole", &g->centre_pole);
  push_pole(L, "outer_pole", &g->outer_pole);
  efl_set_number(L, "half_height", g->half_height);
  efl_set_number(L, "window_height", g->window_height);
  efl_set_number(L, "window_width", g->window_width);
  efl_set_number(L, "window_area", g->window_area);
  efl_set_number(L, "window_leakage", g->window_leakage);
  efl_set_number(L, "inner_turn", g->inner_turn);
  efl_set_number(L, "ring_outer_diameter", g->ring_outer_diameter);
  efl_set_number(L, "ring_inner_diameter", g->ring_inner_diameter);
  efl_set_number(L, "ring_height", g->ring_height);
  efl_set_number(L, "outer_surface", g->outer_surface);
  efl_set_number(L, "envelope_width", g->envelope_width);
  efl_set_number(L, "envelope_depth", g->envelope_depth);
  efl_set_number(L, "envelope_height", g->envelope_height);
  push_effective(L, g);
}

/* Raises when the table at `index` has a key that is no letter of the family. */
static void check_letters(lua_State *L, int index, ef_shape_family family) {
  const char *const *letters = ef_shape_letters(family);
  for (lua_pushnil(L); lua_next(L, index); lua_pop(L, 1)) {
    const char *key = lua_type(L, -2) == LUA_TSTRING ? lua_tostring(L, -2) : "";
    size_t i = 0;
    while (letters[i] && (strncmp(key, letters[i], bare_length(letters[i])) != 0 ||
                          strlen(key) != bare_length(letters[i])))
      i++;
    if (letters[i]) continue;
    const char *shown = luaL_tolstring(L, -2, NULL);
    luaL_Buffer allowed;
    luaL_buffinit(L, &allowed);
    for (size_t j = 0; letters[j]; j++) {
      if (j > 0) luaL_addstring(&allowed, ", ");
      luaL_addlstring(&allowed, letters[j], bare_length(letters[j]));
    }
    luaL_pushresult(&allowed);
    const char *list = lua_tostring(L, -1);
    const char *field = lua_pushfstring(L, "dimension %s", shown);
    efl_raise_text(
        L, field,
        lua_pushfstring(L, "shape %s has no %s; allowed: %s", ef_shape_name(family), field, list));
  }
}

/* core.shape(family, { letter = m, ... }) -> geometry */
static int shape_evaluate(lua_State *L) {
  ef_shape_family family = check_family(L, 1);
  luaL_checktype(L, 2, LUA_TTABLE);
  check_letters(L, 2, family);
  const char *const *letters = ef_shape_letters(family);
  double dimensions[EF_SHAPE_MAX_DIMENSIONS] = {0};
  for (size_t i = 0; letters[i]; i++) {
    size_t length = bare_length(letters[i]);
    const char *name = lua_pushlstring(L, letters[i], length);
    dimensions[i] = letters[i][length] ? efl_number_or(L, 2, "dimension ", name, 0)
                                       : efl_number(L, 2, "dimension ", name);
    lua_pop(L, 1);
  }
  ef_context context;
  efl_context(L, &context);
  ef_core_geometry geometry;
  ef_status status = ef_shape_evaluate(&context, family, dimensions, &geometry);
  if (status != EF_OK) return efl_raise(L, status, &context);
  push_geometry(L, &geometry);
  return 1;
}

/* core.shape_effective({ { length = m, area = m2 }, ... }) -> effective parameters */
static int shape_effective(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  size_t count = (size_t)lua_rawlen(L, 1);
  ef_section *sections = lua_newuserdatauv(L, (count + 1) * sizeof *sections, 0);
  for (size_t i = 0; i < count; i++) {
    if (lua_rawgeti(L, 1, (lua_Integer)i + 1) != LUA_TTABLE)
      efl_raise_text(
          L, "sections",
          lua_pushfstring(L, "section %d is no table; allowed: { length, area }", (int)i + 1));
    const char *what = lua_pushfstring(L, "section %d ", (int)i + 1);
    sections[i].length = efl_number(L, -2, what, "length");
    sections[i].area = efl_number(L, -2, what, "area");
    lua_pop(L, 2);
  }
  ef_context context;
  efl_context(L, &context);
  ef_core_geometry geometry;
  ef_status status = ef_shape_effective(&context, count, sections, &geometry);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_createtable(L, 0, 7);
  push_effective(L, &geometry);
  return 1;
}

void efl_open_shape(lua_State *L) {
  static const luaL_Reg functions[] = {{"shape_families", shape_families},
                                       {"shape_letters", shape_letters},
                                       {"shape", shape_evaluate},
                                       {"shape_effective", shape_effective},
                                       {NULL, NULL}};
  luaL_setfuncs(L, functions, 0);
}
