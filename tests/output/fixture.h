/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_OUTPUT_FIXTURE_H
#define EVENGAP_TESTS_OUTPUT_FIXTURE_H

/* A result made by hand, for the writers: all four planes, formulas instead of solves,
 * no round numbers. Also files: a scratch folder, and reading back what was written. */

#include <stdio.h>

#include "output/sink.h"
#include "solver/result.h"

struct fixture {
    struct geometry geometry;
    struct result result;
    struct messages messages;
    char folder[64]; /* scratch folder, removed with everything in it */
    char *path;      /* PATH as it was; NULL while it still is */
};

/** cmocka setup and teardown; *state is a struct fixture. */
int fixture_setup(void **state);
int fixture_teardown(void **state);

/** The fields of the fixture, by formula. */
double fixture_potential(enum plane_kind kind, double a, double b);
double fixture_field(enum plane_kind kind, int component, double a, double b);

/** Sink on memory: writes arrive in *text (malloc'ed) once the stream is closed. */
struct capture {
    struct sink sink;
    FILE *stream;
    char *text;
    size_t length;
};
void capture_open(struct capture *capture);
void capture_close(struct capture *capture); /* text is ready */
void capture_free(struct capture *capture);

/** Path of a file in the scratch folder; static storage, four turns. */
const char *fixture_path(const struct fixture *fixture, const char *name);

/** Whole file as text (malloc'ed); NULL if it cannot be read. */
char *fixture_read(const char *path);

/** Writes a small file. */
void fixture_write(const char *path, const char *text);

/** From now on a program takes gnuplot's place whose picture is the script it was given,
 *  for tests of what gnuplot is told. The variable PATH is put back by the teardown. */
void fixture_show_scripts(struct fixture *fixture);

/** Number of entries of a folder without the dots; -1 if there is none. */
int fixture_entries(const char *path);

#endif
