/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_SUMMARY_H
#define EVENGAP_OUTPUT_SUMMARY_H

/* The result as JSON, for scripts. The layout is stable: keys may be added, but none is
 * renamed or changes its meaning while "evengap" is 1. All values are in the SI unit
 * named beside them; a value that is not known is null, never 0.
 *
 * {
 *   "evengap": 1,                layout version
 *   "kind": "summary",
 *   "version": "0.1.0",          of the program
 *   "geometry": "filter.yaml",   file name without folders
 *   "title": "...",
 *   "verdict": {
 *     "within_limits": true,     true also when there are no limits
 *     "limits": [ {"limit": key as in the geometry file, "sense": "at_most" or
 *                  "at_least", "allowed", "unit", "figure": name or null,
 *                  "value", "uncertainty" (null when not judged), "judged", "met",
 *                  "reason"} ] },
 *   "accuracy": null, or if one was asked for {"within", "state": "met", "memory" (the
 *                budget is spent), "slow" (refining no longer helps), "rounds" (all are
 *                spent), "unsettled" (figures that do not stand), "unsolved" or
 *                "no_figure", "text": the same in words, "of_limits", "rounds",
 *                "figures": [ {"name", "reached": uncertainty relative to the limit or
 *                the value, null if the figure does not stand, "relative_to": "limit" or
 *                "value", "met"} ], "refined": [ {"plane", "all_lines": factor,
 *                "parts": [ {"name", "factor"} ]} ]},
 *   "planes": [ {"plane": key, "axes": ["z", "x"], "grid": [lines along each axis, of
 *                the finest grid], "levels": [ coarse to fine: {"unknowns",
 *                "residual", "reciprocal_condition", "flux_imbalance"} ],
 *                "capacitance_matrix" (if there are 2 to 8 conductors): {
 *                "conductors": [names], "unit", "value": [ rows ], "uncertainty":
 *                [ rows ], "reciprocity", "row_sum" (result.h)}} ],
 *   "figures": [ {"name", "title", "subject": part or supply or null, "group": "beam",
 *                 "along", "across" or "hardware", "planes": [keys], "value",
 *                 "uncertainty", "grids": [values on the grids of the family, coarse to
 *                 fine; empty when missing or from the input alone], "unit", "state":
 *                 "good", "unsettled" or "missing", "note": text or null} ],
 *   "probes": [ {"index": from 0, as listed in the geometry file, "plane", "place":
 *                {"z": m, "x": m}, "potential", "potential_uncertainty",
 *                "potential_unit", "field": {"z": .., "x": ..}, "field_uncertainty":
 *                {..}, "field_unit", "part": name or null} ],
 *   "files": [ names of all files of the folder ]
 * }
 *
 * The same file gives the same bytes: there is no date and no time in it. */

#include "output/sink.h"
#include "solver/result.h"

/** Writes the summary; files[file_count] is the list of the folder's files.
 *  STATUS_MEMORY. The caller closes the sink. */
enum status summary_write(struct sink *sink, const struct result *result,
                          char *const *files, size_t file_count) MUST_CHECK;

/** The short summary of a drawing: "kind" is "drawing"; only "evengap", "kind",
 *  "version", "geometry", "title" and "files". */
enum status summary_write_drawing(struct sink *sink, const struct geometry *geometry,
                                  char *const *files, size_t file_count) MUST_CHECK;

#endif
