/* The network's userdata, shared by network.c and sensitivity.c. */
#ifndef EF_LUA_NETWORK_USERDATA_H
#define EF_LUA_NETWORK_USERDATA_H

#include <lua.h>

#include "../mag/network.h"

#define EFL_NETWORK "entrefer.network"

typedef struct {
  ef_network *network;
  size_t windings, laws, elements, branches;
} efl_network; /* followed by scratch doubles: see efl_scratch */

/* The userdata at argument 1; raises when it is something else or closed. */
efl_network *efl_check_network(lua_State *L);

/* 2 laws + windings (windings + 1) doubles behind the struct, free between calls. */
static inline double *efl_scratch(efl_network *self) {
  return (double *)(void *)(self + 1);
}

/* network:sensitivity(direction) */
int efl_network_sensitivity(lua_State *L);

#endif
