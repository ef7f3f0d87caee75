/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Round the rod at the origin, outside: sum over odd n of (A_n r^n + B_n r^-n) cos nt, in
 * the core C_n r^n cos nt. Continuity at its surfaces gives A_n and B_n for C_n = 1. What is
 * regular at the origin comes from the mean field and the other rods: with w = a + ib, sum
 * over lattice points u of B_m (w - u)^-m, so
 *     A_n = [n = 1] - sum over m of C(m+n-1, n) S_(n+m) B_m,   S_k = sum of u^-k,
 * where S_2 = pi belongs to a mean field of 1 and S_k = 0 unless k is 2 or a multiple
 * of 4. The flux is 1 - 2 pi B_1. */

#include "tests/support/lattice_of_rods.h"

#include <complex.h>
#include <math.h>

#include "shared/constants.h"

enum { TERMS = LATTICE_TERMS, REACH = 60 };

/* Lattice sums; the fourth in closed form, Gamma(1/4)^8/(960 pi^2), higher ones by rings. */
static double lattice_sum(int k)
{
    double complex sum = 0.0;
    if (k == 2)
        return PI;
    if (k % 4 != 0)
        return 0.0;
    if (k == 4)
        return pow(tgamma(0.25), 8.0) / (960.0 * PI * PI);
    for (int ring = REACH; ring >= 1; ring--)
        for (int i = -ring; i <= ring; i++)
            for (int j = -ring; j <= ring; j += i == -ring || i == ring ? 1 : 2 * ring)
                sum += cpow(i + j * (double complex)I, -k);
    return creal(sum);
}

static double binomial(int n, int k)
{
    return exp(lgamma(n + 1.0) - lgamma(k + 1.0) - lgamma(n - k + 1.0));
}

/* Gaussian elimination with row exchange, matrix [TERMS][TERMS + 1]. */
static void eliminate(double matrix[TERMS][TERMS + 1])
{
    for (int c = 0; c < TERMS; c++) {
        int best = c;
        for (int r = c; r < TERMS; r++)
            best = fabs(matrix[r][c]) > fabs(matrix[best][c]) ? r : best;
        for (int k = 0; k <= TERMS; k++) {
            const double swap = matrix[c][k];
            matrix[c][k] = matrix[best][k];
            matrix[best][k] = swap;
        }
        for (int r = 0; r < TERMS; r++) {
            const double factor = r == c ? 0.0 : matrix[r][c] / matrix[c][c];
            for (int k = c; k <= TERMS; k++)
                matrix[r][k] -= factor * matrix[c][k];
        }
    }
}

/* Round the core, in the rod: the shares of C_n a^n that rise as r^n and fall as r^-n. */
static void shares_in_rod(const struct rod *rod, int n, double *rise, double *fall)
{
    const double ratio =
        rod->core_radius > 0.0 ? rod->core_permittivity / rod->permittivity : 1.0;
    *rise = 0.5 * (1.0 + ratio);
    *fall = 0.5 * (1.0 - ratio) * pow(rod->core_radius / rod->radius, 2 * n);
}

/* A_n a^n and B_n a^-n of a rod for C_n a^n = 1. */
static void response(const struct rod *rod, int n, double *a, double *b)
{
    const double k = rod->permittivity;
    double rise, fall;
    shares_in_rod(rod, n, &rise, &fall);
    *a = 0.5 * (rise + fall + k * (rise - fall));
    *b = 0.5 * (rise + fall - k * (rise - fall));
}

/* C_n a^n, n = 1, 3, ..., for a mean field of 1. */
static void solve(const struct rod *rod, double core[TERMS])
{
    /* Unknowns are C_n a^n, rows scaled by a^n: all of order one. */
    double matrix[TERMS][TERMS + 1], sums[4 * TERMS], a, b;
    for (int k = 2; k < 4 * TERMS; k++)
        sums[k] = lattice_sum(k);
    for (int row = 0; row < TERMS; row++) {
        const int n = 2 * row + 1;
        for (int column = 0; column < TERMS; column++) {
            const int m = 2 * column + 1;
            response(rod, m, &a, &b);
            matrix[row][column] =
                b * binomial(m + n - 1, n) * sums[n + m] * pow(rod->radius, n + m);
            matrix[row][column] += row == column ? a : 0.0;
        }
        matrix[row][TERMS] = row == 0 ? rod->radius : 0.0;
    }
    eliminate(matrix);
    for (int row = 0; row < TERMS; row++)
        core[row] = matrix[row][TERMS] / matrix[row][row];
}

struct lattice_of_rods lattice_of_rods(struct rod rod)
{
    struct lattice_of_rods lattice = {.rod = rod};
    double a, b;
    solve(&rod, lattice.core);
    response(&rod, 1, &a, &b);
    lattice.effective = 1.0 - 2.0 * PI * b * lattice.core[0] * rod.radius;
    lattice.centre = lattice.core[0] / rod.radius;
    return lattice;
}

/* The same at a distance r from the axis: in the core, the rod or outside. */
static void shares_at(const struct rod *rod, double r, int n, double *rise,
                      double *fall)
{
    if (r >= rod->radius) {
        response(rod, n, rise, fall);
    } else if (r >= rod->core_radius) {
        shares_in_rod(rod, n, rise, fall);
    } else {
        *rise = 1.0;
        *fall = 0.0;
    }
}

double lattice_of_rods_at(const struct lattice_of_rods *lattice, struct vec2 at,
                          struct vec2 *gradient)
{
    double rise, fall;
    double complex value = 0.0, slope = 0.0;
    const double radius = lattice->rod.radius;
    const double complex w = (at.a + at.b * (double complex)I) / radius;
    for (int k = TERMS - 1; k >= 0; k--) {
        const int n = 2 * k + 1;
        shares_at(&lattice->rod, vec2_length(at), n, &rise, &fall);
        const double complex up = rise * cpow(w, n), down = fall * cpow(w, -n);
        value += lattice->core[k] * (up + down);
        slope += lattice->core[k] * n * (up - down) / (w * radius);
    }
    *gradient = (struct vec2){creal(slope), -cimag(slope)};
    return creal(value);
}
