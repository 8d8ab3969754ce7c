#include "context.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static void *resize_with_libc(void *user, void *block, size_t old_size, size_t new_size) {
  (void)user;
  (void)old_size;
  if (new_size == 0) {
    free(block);
    return NULL;
  }
  return realloc(block, new_size);
}

void ef_context_init(ef_context *context) {
  memset(context, 0, sizeof *context);
  context->allocator.resize = resize_with_libc;
  context->tolerance = 1e-12;
  context->max_iterations = 200;
  context->threads = 1;
}

static void copy_text(char *to, size_t size, const char *from) {
  snprintf(to, size, "%s", from ? from : "");
}

ef_status ef_fail(ef_context *context, ef_status status, const char *field, double value,
                  const char *allowed) {
  copy_text(context->field, sizeof context->field, field);
  copy_text(context->allowed, sizeof context->allowed, allowed);
  context->value = value;
  snprintf(context->message, sizeof context->message, "%s is %.6g; allowed: %s", context->field,
           value, context->allowed);
  return status;
}

ef_status ef_fail_message(ef_context *context, ef_status status, const char *field,
                          const char *message) {
  copy_text(context->field, sizeof context->field, field);
  copy_text(context->message, sizeof context->message, message);
  context->allowed[0] = '\0';
  context->value = NAN;
  return status;
}

ef_status ef_require_positive(ef_context *context, const char *field, double value) {
  if (isfinite(value) && value > 0) return EF_OK;
  return ef_fail(context, EF_BAD_VALUE, field, value, "a finite number above 0");
}

const char *ef_status_name(ef_status status) {
  switch (status) {
  case EF_OK:
    return "ok";
  case EF_BAD_VALUE:
    return "bad_value";
  case EF_OUT_OF_RANGE:
    return "out_of_range";
  case EF_NO_MEMORY:
    return "no_memory";
  case EF_NOT_CONVERGED:
    return "not_converged";
  case EF_SINGULAR:
    return "singular";
  case EF_CANCELLED:
    return "cancelled";
  }
  return "unknown";
}

void *ef_allocate(ef_context *context, size_t count, size_t size) {
  if (count == 0 || size == 0) count = size = 1;
  void *block = NULL;
  if (count <= SIZE_MAX / size)
    block = context->allocator.resize(context->allocator.user, NULL, 0, count * size);
  if (!block) {
    ef_fail_message(context, EF_NO_MEMORY, "memory", "out of memory");
    return NULL;
  }
  memset(block, 0, count * size);
  return block;
}

void ef_release(ef_context *context, void *block, size_t count, size_t size) {
  if (!block) return;
  if (count == 0 || size == 0) count = size = 1;
  context->allocator.resize(context->allocator.user, block, count * size, 0);
}
