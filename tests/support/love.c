/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/love.h"

#include <gsl/gsl_integration.h>
#include <gsl/gsl_linalg.h>

#include "shared/constants.h"

/* Collocation at the points of the quadrature (Nystroem). */
double love_capacitance(double distance_over_radius, int points)
{
    const double k = distance_over_radius;
    const size_t n = (size_t)points;
    gsl_integration_glfixed_table *rule = gsl_integration_glfixed_table_alloc(n);
    gsl_matrix *matrix = gsl_matrix_alloc(n, n);
    gsl_vector *f = gsl_vector_alloc(n), *right = gsl_vector_alloc(n);
    gsl_permutation *order = gsl_permutation_alloc(n);
    int sign;
    double sum = 0.0, x, y, weight;
    for (size_t i = 0; i < n; i++) {
        gsl_integration_glfixed_point(-1.0, 1.0, i, &x, &weight, rule);
        gsl_vector_set(right, i, 1.0);
        for (size_t j = 0; j < n; j++) {
            gsl_integration_glfixed_point(-1.0, 1.0, j, &y, &weight, rule);
            gsl_matrix_set(matrix, i, j,
                           (i == j) - weight * k / (PI * (k * k + (x - y) * (x - y))));
        }
    }
    gsl_linalg_LU_decomp(matrix, order, &sign);
    gsl_linalg_LU_solve(matrix, order, right, f);
    for (size_t i = 0; i < n; i++) {
        gsl_integration_glfixed_point(-1.0, 1.0, i, &x, &weight, rule);
        sum += weight * gsl_vector_get(f, i);
    }
    gsl_permutation_free(order);
    gsl_vector_free(right);
    gsl_vector_free(f);
    gsl_matrix_free(matrix);
    gsl_integration_glfixed_table_free(rule);
    return 2.0 * sum;
}
