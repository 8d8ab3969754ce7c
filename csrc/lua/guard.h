/* Guarded standard functions for an isolated state: the same results, but no single call takes much
 * longer, or makes longer texts, than a few thousand instructions of Lua could. */
#ifndef EF_LUA_GUARD_H
#define EF_LUA_GUARD_H

#include <lua.h>

/* Replaces find, match, gmatch and gsub in the table on the top of the stack (the string library).
 */
void efl_guard_patterns(lua_State *L);

/* Replaces rep and format there, and takes dump away. */
void efl_guard_strings(lua_State *L);

/* Replaces concat, insert, move, remove, sort and unpack in the table on the top of the stack. */
void efl_guard_tables(lua_State *L);

/* tostring without addresses, which differ from run to run. */
int efl_tostring(lua_State *L);

#endif
