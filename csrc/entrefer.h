/* entrefer: the C face of the whole core. Include this one header.
 *
 * Units are SI throughout (m, A, T, H, s); temperatures are in degrees Celsius. Functions return an
 * ef_status and write results through pointers; on any status but EF_OK no result is written and
 * the context holds a message. Each room's header documents its own functions. */
#ifndef ENTREFER_H
#define ENTREFER_H

#define ENTREFER_VERSION "0.1.0"

#include "num/context.h"
#include "num/curve.h"
#include "num/root.h"
#include "num/band.h"
#include "mag/shape.h"
#include "mag/law.h"
#include "mag/material.h"
#include "mag/gap.h"
#include "mag/pocket.h"
#include "mag/ring.h"
#include "mag/network.h"

#endif
