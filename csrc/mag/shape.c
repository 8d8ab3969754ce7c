/* Families of core shapes: names, letters, checks that all share, and the dispatch. */
#include "shape_internal.h"

#include <stdio.h>
#include <string.h>

typedef struct {
  const char *name;
  const char *letters[EF_SHAPE_MAX_DIMENSIONS + 1];
  ef_status (*evaluate)(ef_context *context, const double *d, ef_core_geometry *g);
} family_entry;

static const family_entry families[EF_SHAPE_COUNT] = {
    [EF_SHAPE_RING] = {"ring", {"d1", "d2", "h", "r0?"}, ef_shape_ring},
    [EF_SHAPE_U] = {"U", {"A", "B", "C", "D", "E"}, ef_shape_u},
    [EF_SHAPE_E] = {"E", {"A", "B", "C", "D", "E", "F"}, ef_shape_e},
    [EF_SHAPE_PLANAR_E] = {"planar E", {"A", "B", "C", "D", "E", "F"}, ef_shape_e},
    [EF_SHAPE_ETD] = {"ETD", {"A", "B", "C", "D", "E", "F"}, ef_shape_round_post},
    [EF_SHAPE_EER] = {"EER", {"A", "B", "C", "D", "E", "F"}, ef_shape_round_post},
    [EF_SHAPE_EC] = {"EC", {"A", "B", "C", "D", "E", "F"}, ef_shape_round_post},
    [EF_SHAPE_EFD] = {"EFD", {"A", "B", "C", "D", "E", "F", "G"}, ef_shape_efd},
    [EF_SHAPE_EP] = {"EP", {"A", "2B", "C", "2D", "E", "F", "G"}, ef_shape_ep},
    [EF_SHAPE_PQ] = {"PQ", {"A", "2B", "C", "2D", "E", "F", "G", "J"}, ef_shape_pq},
    [EF_SHAPE_RM] = {"RM", {"a", "b", "d2", "d3", "d4?", "h1", "h2", "e"}, ef_shape_rm},
    [EF_SHAPE_POT] = {"pot", {"d1", "d2", "d3", "d4?", "h1", "h2", "n?", "g?"}, ef_shape_pot},
};

static const family_entry *entry_of(ef_shape_family family) {
  return (unsigned)family < EF_SHAPE_COUNT ? &families[family] : NULL;
}

const char *ef_shape_name(ef_shape_family family) {
  const family_entry *entry = entry_of(family);
  return entry ? entry->name : NULL;
}

const char *const *ef_shape_letters(ef_shape_family family) {
  const family_entry *entry = entry_of(family);
  return entry ? entry->letters : NULL;
}

/* Far beyond any core, and far inside what doubles can square and divide. */
#define SMALLEST 1e-9
#define LARGEST  1e3

static ef_status check_dimension(ef_context *context, const char *letter, double value) {
  char field[EF_FIELD_SIZE];
  size_t length = strlen(letter);
  int optional = letter[length - 1] == '?';
  snprintf(field, sizeof field, "dimension %.*s", (int)length - optional, letter);
  if (value >= SMALLEST && value <= LARGEST) return EF_OK;
  if (optional && value == 0) return EF_OK;
  return ef_fail(context, EF_BAD_VALUE, field, value,
                 optional ? "0 (none), or from 1e-9 to 1000" : "from 1e-9 m to 1000 m");
}

ef_status ef_shape_between(ef_context *context, const char *letter, double value,
                           ef_shape_bound low, ef_shape_bound high) {
  if (value > low.value && value < high.value) return EF_OK;
  char field[EF_FIELD_SIZE], allowed[EF_ALLOWED_SIZE];
  snprintf(field, sizeof field, "dimension %s", letter);
  if (!high.name)
    snprintf(allowed, sizeof allowed, "above %s = %.6g m", low.name, low.value);
  else if (low.value > 0)
    snprintf(allowed, sizeof allowed, "above %s = %.6g m and below %s = %.6g m", low.name,
             low.value, high.name, high.value);
  else
    snprintf(allowed, sizeof allowed, "below %s = %.6g m", high.name, high.value);
  return ef_fail(context, EF_BAD_VALUE, field, value, allowed);
}

ef_status ef_shape_evaluate(ef_context *context, ef_shape_family family, const double *dimensions,
                            ef_core_geometry *geometry) {
  const family_entry *entry = entry_of(family);
  if (!entry) return ef_fail_message(context, EF_BAD_VALUE, "shape", "unknown core shape family");
  for (size_t i = 0; entry->letters[i]; i++) {
    ef_status status = check_dimension(context, entry->letters[i], dimensions[i]);
    if (status != EF_OK) return status;
  }
  ef_core_geometry result = {.family = family};
  ef_status status = entry->evaluate(context, dimensions, &result);
  if (status == EF_OK) *geometry = result;
  return status;
}
