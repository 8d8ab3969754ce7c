/* What all files of the binding share: reading arguments into C structs and raising errors. */
#ifndef EF_LUA_BINDING_H
#define EF_LUA_BINDING_H

#include <lua.h>
#include <lauxlib.h>

#include "../entrefer.h"

/* A context whose memory comes from the Lua state's own allocator. */
void efl_context(lua_State *L, ef_context *context);

/* Raises the table { code, field, value, allowed, message } of the context's failure, with the
 * metatable that prints it as its message. Does not return. */
int efl_raise(lua_State *L, ef_status status, const ef_context *context);

/* Raises such a table for a bad argument found by the binding itself. */
int efl_raise_value(lua_State *L, const char *field, double value, const char *allowed);
int efl_raise_text(lua_State *L, const char *field, const char *message);

/* Pushes such a table with a code of its own. */
void efl_push_error(lua_State *L, const char *code, const char *field, const char *message);

/* Number in field `name` of the table at `index`; raises when missing or no finite number.
 * `what` prefixes the field's name in the message (may be ""). */
double efl_number(lua_State *L, int index, const char *what, const char *name);

/* The same with a default for an absent field. */
double efl_number_or(lua_State *L, int index, const char *what, const char *name, double otherwise);

/* Non-negative integer in field `name`, up to `most`. */
size_t efl_count(lua_State *L, int index, const char *what, const char *name, size_t most);

/* Copies the list in field `name` of the table at `index` into a userdata left on the stack; raises
 * when it is no list of numbers. *count gets its length. */
double *efl_numbers(lua_State *L, int index, const char *name, size_t *count);

/* Sets field `name` of the table on the top of the stack. */
void efl_set_number(lua_State *L, const char *name, double value);
void efl_set_boolean(lua_State *L, const char *name, int value);
void efl_set_string(lua_State *L, const char *name, const char *value);

/* Registers a userdata's metatable: metamethods (NULL for none) and methods under __index. */
void efl_class(lua_State *L, const char *name, const luaL_Reg *metamethods,
               const luaL_Reg *methods);

/* One opener per file, each adds its functions to the module table on the top of the stack. */
void efl_open_curve(lua_State *L);
void efl_open_shape(lua_State *L);
void efl_open_material(lua_State *L);
void efl_open_gap(lua_State *L);
void efl_open_ring(lua_State *L);
void efl_open_network(lua_State *L);
void efl_open_root(lua_State *L);
void efl_open_digest(lua_State *L);
void efl_open_state(lua_State *L);
void efl_open_read_below(lua_State *L);
void efl_open_child(lua_State *L);

#endif
