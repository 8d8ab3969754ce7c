/* Plain data as bytes: how values cross from one Lua state, or process, to another. Numbers, text,
 * booleans and tables of those with text or number keys; no metatables, functions or userdata, and
 * no deeper, longer or more than the limits say (so a table that contains itself is refused). */
#ifndef EF_LUA_PLAIN_H
#define EF_LUA_PLAIN_H

#include <stddef.h>
#include <lua.h>

enum { EFL_PLAIN_DEPTH = 32 };

typedef struct {
  lua_Alloc resize; /* where the bytes live */
  void *user;
  unsigned char *bytes;
  size_t count, room;
  size_t most; /* refuse to grow beyond */
} efl_bytes;

/* Appends the value at `index`. Raises nothing in L. Returns NULL, or the sentence that says why
 * the value can't cross. */
const char *efl_plain_write(lua_State *L, int index, efl_bytes *to);

/* Pushes the value that `bytes` hold; raises when they are damaged or memory runs out. */
void efl_plain_read(lua_State *L, const unsigned char *bytes, size_t count);

/* Appends bytes. Returns NULL, or the sentence that says why not. */
const char *efl_bytes_append(efl_bytes *to, const void *data, size_t size);

/* Gives the bytes back. */
void efl_bytes_release(efl_bytes *self);

#endif
