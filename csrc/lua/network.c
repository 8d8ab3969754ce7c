/* core.network(spec) and its userdata entrefer.network. */
#include <string.h>

#include "binding.h"
#include "law_userdata.h"
#include "network_userdata.h"

enum { MOST_NODES = 4096, MOST_WINDINGS = 256, MOST_LAWS = 64 };

efl_network *efl_check_network(lua_State *L) {
  efl_network *self = luaL_checkudata(L, 1, EFL_NETWORK);
  if (!self->network) efl_raise_text(L, "network", "the network is closed");
  return self;
}

static size_t list_length(lua_State *L, int index, const char *name) {
  if (lua_getfield(L, index, name) != LUA_TTABLE)
    efl_raise_text(L, name, lua_pushfstring(L, "%s is missing; allowed: a list", name));
  return (size_t)lua_rawlen(L, -1);
}

static void read_element(lua_State *L, int index, ef_element *e) {
  lua_getfield(L, index, "law");
  int linear = lua_isnil(L, -1);
  lua_pop(L, 1);
  *e = (ef_element){.law = EF_NO_LAW};
  if (linear) {
    e->permeance = efl_number(L, index, "element ", "permeance");
    e->by_length = efl_number_or(L, index, "element ", "by_length", 0);
    return;
  }
  e->law = efl_count(L, index, "element ", "law", MOST_LAWS) - 1;
  e->length = efl_number(L, index, "element ", "length");
  e->area = efl_number(L, index, "element ", "area");
  e->bypass = efl_number_or(L, index, "element ", "bypass", 0);
  e->remanence = efl_number_or(L, index, "element ", "remanence", 0);
}

/* The table `branches`, at the top of the stack; counts first, so that one pass can fill. */
static void count_parts(lua_State *L, ef_network_spec *spec) {
  int list = lua_gettop(L);
  for (size_t k = 0; k < spec->branches; k++) {
    if (lua_rawgeti(L, list, (lua_Integer)k + 1) != LUA_TTABLE)
      efl_raise_text(L, "branches", "an entry of branches is no table");
    spec->elements += list_length(L, -1, "elements");
    if (lua_getfield(L, -2, "turns") == LUA_TTABLE)
      for (lua_pushnil(L); lua_next(L, -2); lua_pop(L, 1))
        spec->couplings++;
    lua_pop(L, 3);
  }
}

typedef struct {
  ef_branch *branch;
  ef_element *element;
  ef_turns *coupling;
} spec_arrays;

/* A metamethod may answer the second reading with more than was counted. */
static void check_counted(lua_State *L, int counted) {
  if (!counted) efl_raise_text(L, "branches", "branches changed while it was read");
}

static void read_turns(lua_State *L, size_t branch, const ef_network_spec *spec, ef_turns **next,
                       const ef_turns *end) {
  if (lua_getfield(L, -1, "turns") == LUA_TTABLE)
    for (size_t w = 1; w <= spec->windings; w++) {
      if (lua_rawgeti(L, -1, (lua_Integer)w) != LUA_TNIL) {
        check_counted(L, *next < end);
        *(*next)++ = (ef_turns){w - 1, branch, luaL_checknumber(L, -1)};
      }
      lua_pop(L, 1);
    }
  lua_pop(L, 1);
}

static void read_branches(lua_State *L, ef_network_spec *spec, const spec_arrays *arrays) {
  int list = lua_gettop(L);
  size_t next_element = 0;
  ef_turns *next_coupling = arrays->coupling, *end = next_coupling + spec->couplings;
  for (size_t k = 0; k < spec->branches; k++) {
    check_counted(L, lua_rawgeti(L, list, (lua_Integer)k + 1) == LUA_TTABLE);
    int branch = lua_gettop(L);
    ef_branch *b = &arrays->branch[k];
    b->from = efl_count(L, branch, "branch ", "from", MOST_NODES) - 1;
    b->to = efl_count(L, branch, "branch ", "to", MOST_NODES) - 1;
    read_turns(L, k, spec, &next_coupling, end);
    b->first = next_element;
    b->count = list_length(L, branch, "elements");
    check_counted(L, b->count <= spec->elements - next_element);
    for (size_t i = 0; i < b->count; i++) {
      if (lua_rawgeti(L, -1, (lua_Integer)i + 1) != LUA_TTABLE)
        efl_raise_text(L, "elements", "an entry of elements is no table");
      read_element(L, lua_gettop(L), &arrays->element[next_element++]);
      lua_pop(L, 1);
    }
    lua_settop(L, list);
  }
  check_counted(L, next_element == spec->elements);
  spec->couplings = (size_t)(next_coupling - arrays->coupling);
}

static int network_create(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  lua_settop(L, 1);
  ef_network_spec spec = {.nodes = efl_count(L, 1, "", "nodes", MOST_NODES),
                          .windings = efl_count(L, 1, "", "windings", MOST_WINDINGS),
                          .laws = efl_count(L, 1, "", "laws", MOST_LAWS)};
  size_t scratch = 2 * spec.laws + spec.windings * (spec.windings + 1);
  efl_network *self = lua_newuserdatauv(L, sizeof *self + scratch * sizeof(double), 1);
  memset(self, 0, sizeof *self);
  luaL_setmetatable(L, EFL_NETWORK);
  spec.branches = list_length(L, 1, "branches");
  count_parts(L, &spec);
  size_t couplings = spec.couplings;
  spec_arrays arrays = {
      lua_newuserdatauv(L, (spec.branches + 1) * sizeof(ef_branch), 0),
      lua_newuserdatauv(L, (spec.elements + 1) * sizeof(ef_element), 0),
      lua_newuserdatauv(L, (couplings + 1) * sizeof(ef_turns), 0),
  };
  lua_pushvalue(L, 3);
  read_branches(L, &spec, &arrays);
  spec.branch = arrays.branch;
  spec.element = arrays.element;
  spec.coupling = arrays.coupling;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_network_create(&context, &spec, &self->network);
  if (status != EF_OK) return efl_raise(L, status, &context);
  self->windings = spec.windings;
  self->laws = spec.laws;
  self->elements = spec.elements;
  self->branches = spec.branches;
  lua_pushvalue(L, 2);
  return 1;
}

static int network_release(lua_State *L) {
  efl_network *self = luaL_checkudata(L, 1, EFL_NETWORK);
  ef_context context;
  efl_context(L, &context);
  ef_network_release(&context, self->network);
  self->network = NULL;
  return 0;
}

/* Fills `count` numbers from argument `index`: one number, or a list with one entry each. */
static void read_numbers(lua_State *L, int index, const char *field, size_t count, double *to) {
  if (lua_type(L, index) == LUA_TNUMBER && count == 1) {
    to[0] = lua_tonumber(L, index);
    return;
  }
  if (lua_type(L, index) != LUA_TTABLE || lua_rawlen(L, index) != count)
    efl_raise_text(L, field,
                   lua_pushfstring(L, "%s is no list of the right length; allowed: %d numbers",
                                   field, (int)count));
  for (size_t i = 0; i < count; i++) {
    if (lua_rawgeti(L, index, (lua_Integer)i + 1) != LUA_TNUMBER)
      efl_raise_text(L, field, lua_pushfstring(L, "an entry of %s is no number", field));
    to[i] = lua_tonumber(L, -1);
    lua_pop(L, 1);
  }
}

static ef_law law_of(lua_State *L, int index) {
  const efl_law *law = luaL_checkudata(L, index, EFL_LAW);
  return law->law;
}

/* Reads `count` laws from argument 3 and leaves on the stack what keeps them alive: the law itself,
 * or a list of our own, which the caller of Lua can't change. */
static void read_laws(lua_State *L, size_t count, ef_law *laws) {
  int list = lua_type(L, 3) == LUA_TTABLE;
  if (list)
    lua_createtable(L, (int)count, 0);
  else
    lua_pushvalue(L, 3);
  for (size_t i = 0; i < count; i++) {
    if (list)
      lua_rawgeti(L, 3, (lua_Integer)i + 1);
    else
      lua_pushvalue(L, 3);
    laws[i] = law_of(L, -1);
    if (list)
      lua_rawseti(L, -2, (lua_Integer)i + 1);
    else
      lua_pop(L, 1);
  }
}

/* network:solve(current, law [, warm [, coercive]]) -> iterations, residual
 * current: a number or a list; law: a law or a list of laws; coercive: A/m, a number or a list. */
static int network_solve(lua_State *L) {
  efl_network *self = efl_check_network(L);
  lua_settop(L, 5);
  ef_law laws[MOST_LAWS];
  double *current = efl_scratch(self), *coercive = current + self->windings;
  read_numbers(L, 2, "current", self->windings, current);
  int with_remanence = !lua_isnoneornil(L, 5);
  if (with_remanence) read_numbers(L, 5, "coercive field", self->laws, coercive);
  /* The network keeps pointers into the laws: anchor them while it holds a solution. */
  read_laws(L, self->laws, laws);
  lua_setiuservalue(L, 1, 1);
  ef_network_input input = {laws, with_remanence ? coercive : NULL, current, lua_toboolean(L, 4)};
  ef_network_report report;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_network_solve(&context, self->network, &input, &report);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushinteger(L, report.iterations);
  lua_pushnumber(L, report.residual);
  return 2;
}

static void push_matrix(lua_State *L, size_t count, const double *matrix) {
  lua_createtable(L, (int)count, 0);
  for (size_t w = 0; w < count; w++) {
    lua_createtable(L, (int)count, 0);
    for (size_t v = 0; v < count; v++) {
      lua_pushnumber(L, matrix[w * count + v]);
      lua_rawseti(L, -2, (lua_Integer)v + 1);
    }
    lua_rawseti(L, -2, (lua_Integer)w + 1);
  }
}

/* network:linkage(winding) -> Wb */
static int network_linkage(lua_State *L) {
  efl_network *self = efl_check_network(L);
  lua_Integer winding = luaL_checkinteger(L, 2);
  luaL_argcheck(L, winding >= 1 && (size_t)winding <= self->windings, 2, "no such winding");
  ef_network_solution solution;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_network_get(&context, self->network, &solution);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, ef_network_linkage(self->network, (size_t)winding - 1));
  return 1;
}

/* network:inductance(incremental) -> number with one winding, else matrix */
static int network_inductance(lua_State *L) {
  efl_network *self = efl_check_network(L);
  double *matrix = efl_scratch(self);
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_network_inductance(&context, self->network, lua_toboolean(L, 2), matrix);
  if (status != EF_OK) return efl_raise(L, status, &context);
  if (self->windings == 1)
    lua_pushnumber(L, matrix[0]);
  else
    push_matrix(L, self->windings, matrix);
  return 1;
}

/* network:energy() -> energy, coenergy */
static int network_energy(lua_State *L) {
  efl_network *self = efl_check_network(L);
  double energy, coenergy;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_network_energy(&context, self->network, &energy, &coenergy);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, energy);
  lua_pushnumber(L, coenergy);
  return 2;
}

/* network:element(i) -> drop, flux, flux density, field strength, force */
static int network_element(lua_State *L) {
  efl_network *self = efl_check_network(L);
  lua_Integer i = luaL_checkinteger(L, 2);
  luaL_argcheck(L, i >= 1 && (size_t)i <= self->elements, 2, "no such element");
  size_t element = (size_t)i - 1;
  ef_network_solution s;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_network_get(&context, self->network, &s);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, s.drop[element]);
  lua_pushnumber(L, s.flux[element]);
  lua_pushnumber(L, s.flux_density[element]);
  lua_pushnumber(L, s.field[element]);
  lua_pushnumber(L, ef_network_force(self->network, element));
  return 5;
}

/* network:span(first, last) -> flux density of largest magnitude, its element, mean flux density
 * (weighted by length) and magnetic potential drop over a run of elements: the facts of one limb.
 */
static int network_span(lua_State *L) {
  efl_network *self = efl_check_network(L);
  lua_Integer first = luaL_checkinteger(L, 2), last = luaL_checkinteger(L, 3);
  luaL_argcheck(L, first >= 1 && first <= last && (size_t)last <= self->elements, 3,
                "no such elements");
  ef_span span;
  ef_context context;
  efl_context(L, &context);
  ef_status status =
      ef_network_span(&context, self->network, (size_t)first - 1, (size_t)last - 1, &span);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, span.largest);
  lua_pushinteger(L, (lua_Integer)span.where + 1);
  lua_pushnumber(L, span.mean);
  lua_pushnumber(L, span.drop);
  return 4;
}

/* network:potential(node) -> A */
static int network_potential(lua_State *L) {
  efl_network *self = efl_check_network(L);
  lua_Integer node = luaL_checkinteger(L, 2);
  ef_network_solution s;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_network_get(&context, self->network, &s);
  if (status != EF_OK) return efl_raise(L, status, &context);
  luaL_argcheck(L, node >= 1 && (size_t)node <= s.nodes, 2, "no such node");
  lua_pushnumber(L, s.potential[node - 1]);
  return 1;
}

void efl_open_network(lua_State *L) {
  static const luaL_Reg meta[] = {
      {"__gc", network_release}, {"__close", network_release}, {NULL, NULL}};
  static const luaL_Reg methods[] = {
      {"solve", network_solve},
      {"linkage", network_linkage},
      {"inductance", network_inductance},
      {"energy", network_energy},
      {"element", network_element},
      {"span", network_span},
      {"potential", network_potential},
      {"sensitivity", efl_network_sensitivity},
      {NULL, NULL},
  };
  efl_class(L, EFL_NETWORK, meta, methods);
  lua_pushcfunction(L, network_create);
  lua_setfield(L, -2, "network");
}
