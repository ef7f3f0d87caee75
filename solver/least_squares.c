/* SPDX-License-Identifier: GPL-3.0-or-later */

/* QR decomposition with column pivoting and a complete orthogonal factorisation. */

#include "solver/least_squares.h"

#include <lapacke.h>
#include <math.h>

#define RANK_RCOND 1e-10

static void scale_columns(double *matrix, int rows, int terms, double *norms)
{
    for (int t = 0; t < terms; t++) {
        double *column = matrix + (long)t * rows, sum = 0.0;
        for (int k = 0; k < rows; k++)
            sum += column[k] * column[k];
        norms[t] = sum > 0.0 ? sqrt(sum) : 1.0;
        for (int k = 0; k < rows; k++)
            column[k] /= norms[t];
    }
}

enum status least_squares(double *matrix, int rows, int terms, double *right)
{
    double norms[LEAST_SQUARES_TERMS];
    lapack_int pivots[LEAST_SQUARES_TERMS] = {0}, rank = 0;
    if (terms > LEAST_SQUARES_TERMS)
        return STATUS_SIZE;
    scale_columns(matrix, rows, terms, norms);
    if (LAPACKE_dgelsy(LAPACK_COL_MAJOR, rows, terms, 1, matrix, rows, right,
                       rows > terms ? rows : terms, pivots, RANK_RCOND, &rank) != 0)
        return STATUS_UNTRUSTED;
    for (int t = 0; t < terms; t++) {
        right[t] /= norms[t];
        if (!isfinite(right[t]))
            return STATUS_UNTRUSTED;
    }
    return STATUS_OK;
}
