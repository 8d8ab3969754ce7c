/* entrefer.core: the C module. It opens the binding's files and holds nothing of its own. */
#include "binding.h"

int luaopen_entrefer_core(lua_State *L);

int luaopen_entrefer_core(lua_State *L) {
  luaL_checkversion(L);
  lua_newtable(L);
  efl_set_string(L, "version", ENTREFER_VERSION);
  efl_set_number(L, "mu0", EF_MU0);
  efl_open_curve(L);
  efl_open_root(L);
  efl_open_shape(L);
  efl_open_material(L);
  efl_open_gap(L);
  efl_open_ring(L);
  efl_open_network(L);
  efl_open_digest(L);
  efl_open_state(L);
  efl_open_read_below(L);
  efl_open_child(L);
  return 1;
}
