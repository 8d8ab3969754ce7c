/* The userdata that holds a law and its arrays, shared by material.c and network.c. */
#ifndef EF_LUA_LAW_USERDATA_H
#define EF_LUA_LAW_USERDATA_H

#include "../mag/law.h"

#define EFL_LAW "entrefer.law"

typedef struct {
  ef_law law;
  double storage[];
} efl_law;

#endif
