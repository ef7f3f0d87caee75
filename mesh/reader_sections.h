/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_READER_SECTIONS_H
#define EVENGAP_MESH_READER_SECTIONS_H

/* The readers of the sections of a geometry file. Each reads its node into
 * reader->geometry, reports its mistakes and goes on; what could not be read stays zero.
 * Only for reader*.c. */

#include "mesh/reader_context.h"

/** values: and supplies:, in this order (either may be NULL). Fills reader->symbols. */
void reader_values(struct reader *reader, const struct node *node);
void reader_supplies(struct reader *reader, const struct node *node);

void reader_beam(struct reader *reader, const struct node *node);
void reader_planes(struct reader *reader, const struct node *node);

/** parts: of one plane. */
void reader_parts(struct reader *reader, const struct node *node, struct plane *plane);

/** A new part at the end of the plane, blamed on node; NULL if memory ran out or there
 *  are too many. */
struct part *reader_add_part(struct reader *reader, const struct node *node,
                             struct plane *plane);

/** twin: of the part with index `original` of the plane, read from the part's node. */
bool reader_twins(struct reader *reader, const struct node *node, struct plane *plane,
                  size_t original);

/** The one shape (box, disc or outline, with rounding) among the keys of a mapping. A
 *  turn is not applied. False after a mistake; the shape is then empty. */
bool reader_shape(struct reader *reader, const struct node *node, enum plane_kind kind,
                  struct shape *shape);

/** The turn of a mapping, if there is one, applied to a shape. */
bool reader_turn(struct reader *reader, const struct node *node, enum plane_kind kind,
                 struct shape *shape);

/** Points of an outline: a list of pairs or a two-column file; *points is allocated. */
bool reader_outline(struct reader *reader, const struct node *node,
                    struct vec2 **points, size_t *count);

void reader_probes(struct reader *reader, const struct node *node);
void reader_limits(struct reader *reader, const struct node *node);
void reader_reference(struct reader *reader, const struct node *node);
void reader_lattice(struct reader *reader, const struct node *node);
void reader_grid(struct reader *reader, const struct node *node);

#endif
