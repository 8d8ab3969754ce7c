/* An allocator that counts, fails on demand and checks what it is given back. */
#ifndef ENTREFER_TESTS_COUNTING_H
#define ENTREFER_TESTS_COUNTING_H

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "../../csrc/entrefer.h"

typedef struct {
  size_t calls;   /* blocks asked for */
  size_t fail_at; /* the call that fails, from 1; 0: none */
  int for_good;   /* 1: the calls after it fail as well (Lua asks twice) */
  size_t live;    /* blocks not given back */
  size_t wrong;   /* blocks given back or resized with another size than they have */
} counting;

/* Before each block stands its size; the union keeps the block aligned. */
typedef union {
  size_t size;
  max_align_t alignment;
} counting_head;

static void *counting_resize(void *user, void *block, size_t old_size, size_t new_size) {
  counting *c = user;
  counting_head *head = block ? (counting_head *)block - 1 : NULL;
  if (head && head->size != old_size) c->wrong++;
  if (new_size == 0) {
    if (head) c->live--;
    free(head);
    return NULL;
  }
  c->calls++;
  /* Lua relies on a block that shrinks. */
  if (c->fail_at && !(head && new_size <= head->size) &&
      (c->for_good ? c->calls >= c->fail_at : c->calls == c->fail_at))
    return NULL;
  counting_head *fresh = realloc(head, sizeof *fresh + new_size);
  if (!fresh) return NULL;
  if (!head) {
    c->live++;
    memset(fresh + 1, 0xA5, new_size); /* nobody may count on zeros */
  }
  fresh->size = new_size;
  return fresh + 1;
}

static inline void counting_context(ef_context *context, counting *c, size_t fail_at) {
  memset(c, 0, sizeof *c);
  c->fail_at = fail_at;
  ef_context_init(context);
  context->allocator.resize = counting_resize;
  context->allocator.user = c;
}

#endif
