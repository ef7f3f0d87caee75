/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The model plates on the default family of grids, beside their reference values: what
 * each grid says, what the family says, and whether the stated uncertainty covers the
 * true error.
 *
 *     bench_model_plates [fineness]
 *
 * Ends with status 1 if a value is further than TARGET from its reference. */

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "solver/extrapolate.h"
#include "solver/path.h"
#include "solver/plane_solution.h"
#include "tests/bench/model_plates.h"

#define TARGET 1e-4 /* relative */

enum { LEVELS = RESULT_LEVELS_MAX, VALUES = MODEL_POINTS + 2 };

struct tally {
    double seconds;
    double worst;  /* largest relative error of an extrapolated value */
    int uncovered; /* values whose error exceeds the stated uncertainty */
};

/* The magnitudes that the references are given for: fields, integral, charge. */
static enum status measure(const struct plane_solution *plane,
                           const struct model_reference *reference, double *values)
{
    struct view view = {.geometry = plane->geometry};
    struct path path = {0};
    view.planes[PLANE_ELECTRIC_ALONG] = plane;
    enum status status = path_sample(&view, &path);
    if (status == STATUS_OK)
        values[MODEL_POINTS] =
            fabs(path_integral(&path, path.e_x[0], 0, PATH_POINTS - 1));
    for (int k = 0; k < MODEL_POINTS && status == STATUS_OK; k++) {
        double field[2] = {0.0, 0.0};
        status = plane_field(plane, (struct vec2){reference->z[k], 0.0}, field, NULL);
        values[k] = fabs(field[1]);
    }
    values[MODEL_POINTS + 1] = fabs(plane->part_flux[0]);
    path_free(&path);
    return status;
}

static enum status solve_level(const struct geometry *geometry, int level,
                               const struct model_reference *reference, double *values,
                               double *seconds)
{
    struct plane_solution plane = {0};
    enum status status = plane_solve(
        geometry, PLANE_ELECTRIC_ALONG,
        &(struct grid_request){.fineness = geometry->fineness, .level = level}, &plane,
        NULL);
    if (status == STATUS_OK)
        status = measure(&plane, reference, values);
    printf("  grid %d: %7d unknowns, %.2f s, residual %.1e, 1/cond %.1e, flux sum "
           "%.1e\n",
           level + 1, plane.quality.unknowns, plane.quality.seconds,
           plane.quality.residual, plane.quality.rcond, plane.quality.flux_imbalance);
    *seconds += plane.quality.seconds;
    plane_solution_free(&plane);
    return status;
}

static void name_value(const struct model_reference *reference, int k, char *name,
                       size_t size)
{
    if (k < MODEL_POINTS)
        (void)snprintf(name, size, "E_x at z = %g mm", 1e3 * reference->z[k]);
    else
        (void)snprintf(name, size, "%s",
                       k == MODEL_POINTS ? "integral of E_x" : "charge / eps0");
}

static double wanted_value(const struct model_reference *reference, int k)
{
    if (k < MODEL_POINTS)
        return reference->field[k];
    return k == MODEL_POINTS ? reference->integral : reference->charge;
}

static void print_value(const struct model_reference *reference, int k,
                        double values[LEVELS][VALUES], struct tally *tally)
{
    char name[32];
    double family[LEVELS];
    const double wanted = wanted_value(reference, k);
    for (int l = 0; l < LEVELS; l++)
        family[l] = values[l][k];
    const struct estimate e = extrapolate(family, LEVELS, 0.0);
    const double error = fabs(e.value / wanted - 1.0);
    const double stated = e.uncertainty / wanted;
    name_value(reference, k, name, sizeof name);
    printf("  %-17s %16.9g %16.9g %8.1e %8.1e %8.1e %9.1e %8.1e %6.2f  %s%s%s\n", name,
           wanted, e.value, fabs(family[0] / wanted - 1.0),
           fabs(family[1] / wanted - 1.0), fabs(family[2] / wanted - 1.0), error,
           stated, e.order, error <= TARGET ? "within" : "OUTSIDE",
           error <= stated ? "" : ", not covered", e.settled ? "" : ", unsettled");
    tally->worst = error <= tally->worst ? tally->worst : error; /* keeps NaN */
    tally->uncovered += !(error <= stated);
}

static enum status compare(const char *title, double rounding, double fineness,
                           const struct model_reference *reference, struct tally *tally)
{
    double values[LEVELS][VALUES] = {{0.0}};
    struct geometry geometry;
    enum status status = model_plates(rounding, &geometry);
    geometry.fineness = fineness;
    printf("%s, fineness %g\n", title, fineness);
    for (int l = 0; l < LEVELS && status == STATUS_OK; l++)
        status = solve_level(&geometry, l, reference, values[l], &tally->seconds);
    if (status == STATUS_OK) {
        printf("  %-17s %16s %16s %8s %8s %8s %9s %8s %6s  within %.0e?\n", "",
               "reference", "family", "grid 1", "grid 2", "grid 3", "error", "stated",
               "order", TARGET);
        for (int k = 0; k < VALUES; k++)
            print_value(reference, k, values, tally);
    }
    geometry_free(&geometry);
    return status;
}

int main(int argc, char *argv[])
{
    const double fineness = argc > 1 ? strtod(argv[1], NULL) : 1.0;
    struct tally tally = {0.0, 0.0, 0};
    enum status status =
        compare("model plates, square corners", 0.0, fineness, &model_square, &tally);
    if (status == STATUS_OK)
        status = compare("model plates, corners rounded by 1 mm", 1e-3, fineness,
                         &model_rounded, &tally);
    if (status != STATUS_OK) {
        (void)fprintf(stderr, "bench_model_plates: %s\n", status_text(status));
        return EXIT_FAILURE;
    }
    printf("worst relative error %.1e (target %.0e), errors beyond the stated "
           "uncertainty %d of %d, solves %.2f s\n",
           tally.worst, TARGET, tally.uncovered, 2 * VALUES, tally.seconds);
    return tally.worst <= TARGET ? EXIT_SUCCESS : EXIT_FAILURE;
}
