/* core.sha256(text) -> 64 hexadecimal digits. */
#include "../num/sha256.h"
#include "binding.h"

static int sha256(lua_State *L) {
  static const char digits[] = "0123456789abcdef";
  size_t size;
  const char *text = luaL_checklstring(L, 1, &size);
  unsigned char digest[EF_SHA256_SIZE];
  char shown[2 * EF_SHA256_SIZE];
  ef_sha256(text, size, digest);
  for (size_t i = 0; i < EF_SHA256_SIZE; i++) {
    shown[2 * i] = digits[digest[i] >> 4];
    shown[2 * i + 1] = digits[digest[i] & 15];
  }
  lua_pushlstring(L, shown, sizeof shown);
  return 1;
}

void efl_open_digest(lua_State *L) {
  lua_pushcfunction(L, sha256);
  lua_setfield(L, -2, "sha256");
}
