/* Gaps: core.gap, core.gap_methods, core.gap_edge, core.gap_midplane, core.gap_midplane_edge,
 * core.pocket, core.pocket_field. */
#include <math.h>
#include <string.h>

#include "binding.h"

static const char *const edge_names[] = {"free",     "free exact", "near yoke",
                                         "near leg", "none",       NULL};
static const char *const pole_names[] = {"rectangle", "round", NULL};

/* Index of the string in field `name` of the table at `index` among `names`; raises otherwise. */
static int read_option(lua_State *L, int index, const char *field, const char *name,
                       const char *const *names, const char *allowed) {
  lua_getfield(L, index, name);
  const char *given = lua_type(L, -1) == LUA_TSTRING ? lua_tostring(L, -1) : NULL;
  for (int i = 0; given && names[i]; i++)
    if (strcmp(given, names[i]) == 0) {
      lua_pop(L, 1);
      return i;
    }
  const char *shown = luaL_tolstring(L, -1, NULL);
  return efl_raise_text(L, field,
                        lua_pushfstring(L, "%s is %s; allowed: %s", field, shown, allowed));
}

/* Pushes the table in field `name` of the table at `index`; raises when there is none. */
static void push_table(lua_State *L, int index, const char *field, const char *name) {
  if (lua_getfield(L, index, name) != LUA_TTABLE)
    efl_raise_text(L, field,
                   lua_pushfstring(L, "%s is %s; allowed: a table", field, luaL_typename(L, -1)));
}

static void read_pole(lua_State *L, int index, ef_pole *pole) {
  push_table(L, index, "pole", "pole");
  int table = lua_gettop(L);
  pole->shape = (ef_pole_shape)read_option(L, table, "pole shape", "shape", pole_names,
                                           "\"rectangle\" or \"round\"");
  pole->hole = efl_number_or(L, table, "pole ", "hole", 0);
  if (pole->shape == EF_POLE_ROUND) {
    /* A core's round pole calls its diameter width, as its rectangular ones do. */
    pole->width = efl_number_or(L, table, "pole ", "width", 0);
    if (pole->width == 0) pole->width = efl_number(L, table, "pole ", "diameter");
    pole->depth = pole->width;
  } else {
    pole->width = efl_number(L, table, "pole ", "width");
    pole->depth = efl_number(L, table, "pole ", "depth");
    pole->corner = efl_number_or(L, table, "pole ", "corner", 0);
  }
  lua_pop(L, 1);
}

static void read_edge(lua_State *L, int edges, const char *name, ef_edge *edge) {
  const char *prefix = lua_pushfstring(L, "edge %s ", name);
  const char *kind = lua_pushfstring(L, "%skind", prefix);
  push_table(L, edges, lua_pushfstring(L, "edge %s", name), name);
  edge->kind = (ef_edge_kind)read_option(
      L, lua_gettop(L), kind, "kind", edge_names,
      "\"free\", \"free exact\", \"near yoke\", \"near leg\" or \"none\"");
  if (edge->kind != EF_EDGE_NONE) edge->reach = efl_number(L, lua_gettop(L), prefix, "reach");
  lua_pop(L, 1);
}

static void read_geometry(lua_State *L, int index, ef_gap_geometry *geometry) {
  luaL_checktype(L, index, LUA_TTABLE);
  memset(geometry, 0, sizeof *geometry);
  int top = lua_gettop(L);
  read_pole(L, index, &geometry->pole);
  geometry->length = efl_number(L, index, "gap ", "length");
  geometry->winding_length = efl_number_or(L, index, "", "winding_length", 0);
  if (lua_getfield(L, index, "edges") != LUA_TNIL) {
    lua_pop(L, 1);
    push_table(L, index, "edges", "edges");
    int edges = lua_gettop(L);
    read_edge(L, edges, "x_low", &geometry->x_low);
    read_edge(L, edges, "x_high", &geometry->x_high);
    read_edge(L, edges, "y_low", &geometry->y_low);
    read_edge(L, edges, "y_high", &geometry->y_high);
  }
  lua_settop(L, top);
}

static ef_gap_method check_method(lua_State *L, int index) {
  const char *given = luaL_checkstring(L, index);
  for (int i = 0; i < EF_GAP_METHOD_COUNT; i++)
    if (strcmp(given, ef_gap_method_name((ef_gap_method)i)) == 0) return (ef_gap_method)i;
  efl_raise_text(L, "gap method",
                 lua_pushfstring(L,
                                 "gap method is %s; allowed: plain, added length, handbook or "
                                 "conformal",
                                 given));
  return EF_GAP_METHOD_COUNT;
}

/***
Permeance of one gap by one method.
@function gap
@tparam string method "plain", "added length", "handbook" or "conformal"
@tparam table geometry pole = { shape = "rectangle", width, depth, corner, hole } or
{ shape = "round", diameter, hole } in m; length in m; edges = { x_low, x_high, y_low, y_high },
each { kind = "free" | "free exact" | "near yoke" | "near leg" | "none", reach in m } (the conformal
method needs them); winding_length in m (the handbook method needs it)
@treturn table permeance (H), permeance_by_length (H/m), fringing and face (no unit), valid, note,
method
@raise the field that is wrong, its value and what is allowed
*/
static int gap(lua_State *L) {
  ef_gap_method method = check_method(L, 1);
  ef_gap_geometry geometry;
  ef_gap_permeance result;
  ef_context context;
  read_geometry(L, 2, &geometry);
  efl_context(L, &context);
  ef_status status = ef_gap_evaluate(&context, method, &geometry, &result);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_createtable(L, 0, 7);
  efl_set_number(L, "permeance", result.permeance);
  efl_set_number(L, "permeance_by_length", result.permeance_by_length);
  efl_set_number(L, "fringing", result.fringing);
  efl_set_number(L, "face", result.face);
  efl_set_boolean(L, "valid", result.valid);
  efl_set_string(L, "note", result.note);
  efl_set_string(L, "method", ef_gap_method_name(method));
  return 1;
}

/***
Names of the methods of @{gap}.
@function gap_methods
@treturn {string,...}
*/
static int gap_methods(lua_State *L) {
  lua_createtable(L, EF_GAP_METHOD_COUNT, 0);
  for (int i = 0; i < EF_GAP_METHOD_COUNT; i++) {
    lua_pushstring(L, ef_gap_method_name((ef_gap_method)i));
    lua_rawseti(L, -2, i + 1);
  }
  return 1;
}

static double check_finite(lua_State *L, int index, const char *field) {
  double value = luaL_checknumber(L, index);
  if (!isfinite(value)) efl_raise_value(L, field, value, "a finite number");
  return value;
}

/***
Permeance of one edge over the mid-plane per mu0 and unit depth, above the face's uniform flux.
@function gap_edge
@tparam string kind as in @{gap}
@tparam number reach m
@tparam number half_length half the gap's length, m
@treturn number permeance (no unit)
@treturn number its derivative with respect to half_length, 1/m
*/
static int gap_edge(lua_State *L) {
  ef_edge edge;
  double permeance = 0, by_length = 0, half_length;
  edge.kind = (ef_edge_kind)luaL_checkoption(L, 1, NULL, edge_names);
  edge.reach = luaL_checknumber(L, 2);
  half_length = luaL_checknumber(L, 3);
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_gap_edge(&context, &edge, half_length, &permeance, &by_length);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, permeance);
  lua_pushnumber(L, by_length);
  return 2;
}

/***
Flux density on the middle plane at one edge, relative to the field deep inside.
@function gap_midplane_edge
@tparam number x from the edge, positive under the pole, in units of half the gap's length
@treturn number
*/
static int gap_midplane_edge(lua_State *L) {
  lua_pushnumber(L, ef_gap_midplane_edge(check_finite(L, 1, "x")));
  return 1;
}

/***
Flux density on the middle plane of a whole pole, relative to mu0 u / length.
@function gap_midplane
@tparam table geometry as for @{gap}; only pole and length are used
@tparam number x m, from the pole's axis across its width
@tparam number y m, across its depth
@treturn number
@treturn boolean whether pole and point lie in the range of validity
*/
static int gap_midplane(lua_State *L) {
  ef_gap_geometry geometry;
  ef_gap_permeance unused;
  ef_context context;
  int valid = 0;
  read_geometry(L, 1, &geometry);
  double x = check_finite(L, 2, "x"), y = check_finite(L, 3, "y");
  efl_context(L, &context);
  ef_status status = ef_gap_evaluate(&context, EF_GAP_PLAIN, &geometry, &unused);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, ef_gap_midplane(&geometry, x, y, &valid));
  lua_pushboolean(L, valid);
  return 2;
}

static void read_pocket(lua_State *L, int index, ef_pocket *pocket) {
  luaL_checktype(L, index, LUA_TTABLE);
  pocket->diameter = efl_number(L, index, "pocket ", "diameter");
  lua_getfield(L, index, "through");
  pocket->through = lua_toboolean(L, -1);
  lua_pop(L, 1);
  pocket->depth = pocket->through ? 0 : efl_number(L, index, "pocket ", "depth");
}

/***
What a round pocket in both pole faces, or a hole through both poles, does to a gap.
@function pocket
@tparam table pocket diameter in m, and depth in m (in each face) or through = true
@tparam number gap_length m
@treturn table centre_field and mean_field (relative to mu0 u / gap_length), permeance_loss (H),
loss_by_length (H/m), local_length (m; math.huge for a through hole)
*/
static int pocket(lua_State *L) {
  ef_pocket given;
  ef_pocket_result result;
  ef_context context;
  read_pocket(L, 1, &given);
  double gap_length = luaL_checknumber(L, 2);
  efl_context(L, &context);
  ef_status status = ef_pocket_evaluate(&context, &given, gap_length, &result);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_createtable(L, 0, 5);
  efl_set_number(L, "centre_field", result.centre_field);
  efl_set_number(L, "mean_field", result.mean_field);
  efl_set_number(L, "permeance_loss", result.permeance_loss);
  efl_set_number(L, "loss_by_length", result.loss_by_length);
  efl_set_number(L, "local_length", result.local_length);
  return 1;
}

/***
Flux density inside a pocket's mouth, relative to mu0 u / gap_length.
@function pocket_field
@tparam table pocket as for @{pocket}
@tparam number gap_length m
@tparam number r m, from the axis, within the pocket
@tparam number z m, from the middle plane, between the floors
@treturn number
*/
static int pocket_field(lua_State *L) {
  ef_pocket given;
  ef_context context;
  double relative = 0;
  read_pocket(L, 1, &given);
  double gap_length = luaL_checknumber(L, 2), r = luaL_checknumber(L, 3);
  double z = luaL_checknumber(L, 4);
  efl_context(L, &context);
  ef_status status = ef_pocket_field(&context, &given, gap_length, r, z, &relative);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, relative);
  return 1;
}

void efl_open_gap(lua_State *L) {
  static const luaL_Reg functions[] = {{"gap", gap},
                                       {"gap_methods", gap_methods},
                                       {"gap_edge", gap_edge},
                                       {"gap_midplane", gap_midplane},
                                       {"gap_midplane_edge", gap_midplane_edge},
                                       {"pocket", pocket},
                                       {"pocket_field", pocket_field},
                                       {NULL, NULL}};
  luaL_setfuncs(L, functions, 0);
}
