/* Cores of rectangular legs: U, E, planar E, EFD. Letters: A overall width, B height of one half,
 * C depth, D window depth of one half, E window opening (U: window width), F centre leg's width,
 * G centre leg's thickness (EFD). */
#include "shape_internal.h"

#include <math.h>

/* IEC 60205 (from memory); corners by its rule for sharp ones: a quarter circle through the middles
 * of both sections, with their mean area. */
static double corner_length(double thickness, double other) {
  return EF_PI / 8 * (thickness + other);
}

ef_status ef_shape_set_frame(ef_context *context, const ef_shape_frame *frame,
                             ef_core_geometry *g) {
  double leg_area = frame->leg * frame->depth, yoke_area = frame->yoke * frame->depth;
  double height = 2 * frame->window_depth;
  g->topology = EF_TOPOLOGY_THREE_LEG;
  g->centre_leg = (ef_section){height, frame->post_area};
  g->outer_leg = (ef_section){height, leg_area};
  g->yoke = (ef_section){frame->arm, yoke_area};
  g->outer_corner =
      (ef_section){corner_length(frame->leg, frame->yoke), (leg_area + yoke_area) / 2};
  g->centre_corner = (ef_section){corner_length(frame->half_post, frame->yoke),
                                  (yoke_area + frame->post_area / 2) / 2};
  g->outer_pole = ef_shape_rectangle_pole(frame->leg, frame->depth);
  g->half_height = frame->window_depth + frame->yoke;
  g->window_height = height;
  return ef_shape_sum(context, g);
}

ef_status ef_shape_u(ef_context *context, const double *d, ef_core_geometry *g) {
  double a = d[0], b = d[1], c = d[2], depth = d[3], e = d[4];
  const ef_shape_bound none = {"0", 0};
  ef_status status = ef_shape_between(context, "D", depth, none, (ef_shape_bound){"B", b});
  if (status != EF_OK) return status;
  status = ef_shape_between(context, "E", e, none, (ef_shape_bound){"A", a});
  if (status != EF_OK) return status;
  double leg = (a - e) / 2, yoke = b - depth;
  g->topology = EF_TOPOLOGY_TWO_LEG;
  g->outer_leg = (ef_section){2 * depth, leg * c};
  g->yoke = (ef_section){e, yoke * c};
  g->outer_corner = (ef_section){corner_length(leg, yoke), (leg + yoke) * c / 2};
  status = ef_shape_sum(context, g);
  if (status != EF_OK) return status;
  g->outer_pole = ef_shape_rectangle_pole(leg, c);
  g->half_height = b;
  g->window_height = 2 * depth;
  g->window_width = e;
  g->window_area = 2 * depth * e;
  g->window_leakage = ef_shape_u_leakage(c, e, leg);
  g->inner_turn = 2 * (leg + c);
  ef_shape_set_box(g, a, c, 2 * b);
  return EF_OK;
}

static ef_status rectangular_post(ef_context *context, const double *d, double thickness,
                                  ef_core_geometry *g) {
  double a = d[0], b = d[1], c = d[2], depth = d[3], e = d[4], f = d[5];
  ef_status status =
      ef_shape_between(context, "D", depth, (ef_shape_bound){"0", 0}, (ef_shape_bound){"B", b});
  if (status != EF_OK) return status;
  status = ef_shape_between(context, "E", e, (ef_shape_bound){"F", f}, (ef_shape_bound){"A", a});
  if (status != EF_OK) return status;
  double leg = (a - e) / 2, window = (e - f) / 2;
  const ef_shape_frame frame = {.depth = c,
                                .window_depth = depth,
                                .leg = leg,
                                .yoke = b - depth,
                                .arm = window,
                                .half_post = f / 2,
                                .post_area = f * thickness};
  status = ef_shape_set_frame(context, &frame, g);
  if (status != EF_OK) return status;
  g->centre_pole = ef_shape_rectangle_pole(f, thickness);
  g->window_width = window;
  g->window_area = 2 * depth * window;
  g->window_leakage = ef_shape_e_leakage(thickness, c, f / 2, window, leg);
  g->inner_turn = 2 * (f + thickness);
  ef_shape_set_box(g, a, c, 2 * b);
  return EF_OK;
}

ef_status ef_shape_e(ef_context *context, const double *d, ef_core_geometry *g) {
  return rectangular_post(context, d, d[2], g);
}

/* As E with a flat centre leg of thickness G. The standard adds the slant of the path that the
 * offset of that leg causes; it is left out, which makes the effective length 1 % to 2 % short. */
ef_status ef_shape_efd(ef_context *context, const double *d, ef_core_geometry *g) {
  double c = d[2], thickness = d[6];
  if (thickness > c)
    return ef_shape_between(context, "G", thickness, (ef_shape_bound){"0", 0},
                            (ef_shape_bound){"or equal to C", c});
  return rectangular_post(context, d, thickness, g);
}
