/* core.curve{ x = {...}, y = {...} [, first_slope, last_slope] } and its userdata. */
#include <math.h>
#include <string.h>

#include "binding.h"

#define CURVE "entrefer.curve"

typedef struct {
  ef_curve curve;
  double numbers[]; /* x, y, then the curve's storage */
} curve_userdata;

static const ef_curve *check_curve(lua_State *L) {
  const curve_userdata *self = luaL_checkudata(L, 1, CURVE);
  return &self->curve;
}

static int curve_create(lua_State *L) {
  luaL_checktype(L, 1, LUA_TTABLE);
  size_t count, ordinates;
  const double *x = efl_numbers(L, 1, "x", &count), *y = efl_numbers(L, 1, "y", &ordinates);
  if (count != ordinates)
    efl_raise_value(L, "number of ordinates", (double)ordinates, "as many as abscissas");
  double first = efl_number_or(L, 1, "", "first_slope", -1);
  double last = efl_number_or(L, 1, "", "last_slope", -1);
  size_t numbers = 2 * count + EF_CURVE_STORAGE(count);
  curve_userdata *self = lua_newuserdatauv(L, sizeof *self + numbers * sizeof(double), 0);
  memcpy(self->numbers, x, count * sizeof *x);
  memcpy(self->numbers + count, y, count * sizeof *y);
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_curve_build(&context, "curve", count, self->numbers, self->numbers + count,
                                    first, last, self->numbers + 2 * count, &self->curve);
  if (status != EF_OK) return efl_raise(L, status, &context);
  luaL_setmetatable(L, CURVE);
  return 1;
}

/* The abscissa at argument 2, which must lie within the points. */
static double check_abscissa(lua_State *L, const ef_curve *curve) {
  double x = luaL_checknumber(L, 2), low = curve->x[0], high = curve->x[curve->count - 1];
  if (!(x >= low && x <= high))
    efl_raise_value(L, "abscissa", x,
                    lua_pushfstring(L, "from %f to %f, the range of the curve", low, high));
  return x;
}

/* curve:at(x) -> value, slope, second derivative */
static int curve_at(lua_State *L) {
  const ef_curve *curve = check_curve(L);
  double x = check_abscissa(L, curve);
  ef_curve_point p = ef_curve_at(curve, ef_curve_piece(curve, x), x);
  lua_pushnumber(L, p.value);
  lua_pushnumber(L, p.first);
  lua_pushnumber(L, p.second);
  return 3;
}

/* curve:integral(x) -> from the first point to x */
static int curve_integral(lua_State *L) {
  const ef_curve *curve = check_curve(L);
  double x = check_abscissa(L, curve);
  lua_pushnumber(L, ef_curve_integral(curve, ef_curve_piece(curve, x), x));
  return 1;
}

/* curve:inverse(y) -> x; the left end of a flat stretch */
static int curve_inverse(lua_State *L) {
  const ef_curve *curve = check_curve(L);
  double x = 0;
  ef_context context;
  efl_context(L, &context);
  ef_status status = ef_curve_inverse(&context, curve, luaL_checknumber(L, 2), &x);
  if (status != EF_OK) return efl_raise(L, status, &context);
  lua_pushnumber(L, x);
  return 1;
}

void efl_open_curve(lua_State *L) {
  static const luaL_Reg methods[] = {
      {"at", curve_at}, {"integral", curve_integral}, {"inverse", curve_inverse}, {NULL, NULL}};
  efl_class(L, CURVE, NULL, methods);
  lua_pushcfunction(L, curve_create);
  lua_setfield(L, -2, "curve");
}
