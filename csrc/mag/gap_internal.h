/* The gap's inside, shared by gap*.c only. */
#ifndef EF_MAG_GAP_INTERNAL_H
#define EF_MAG_GAP_INTERNAL_H

#include "gap.h"

/* ef_gap_edge with the name that a failure gives to the reach. */
ef_status ef_gap_named_edge(ef_context *context, const char *field, const ef_edge *edge,
                            double half_length, double *permeance, double *by_length);

#endif
