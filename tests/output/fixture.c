/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A pair of plates and a pair of poles whose fields fall off as two different smooth
 * steps, so that every plot has something to show and every column its own numbers. */

#define _DEFAULT_SOURCE /* NOLINT: mkdtemp, open_memstream */

#include "tests/output/fixture.h"

#include <dirent.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "shared/mem.h"
#include "tests/support/assert_close.h"

#define NA        41
#define NB        31
#define NODES     ((size_t)NA * NB)
#define E_CENTRE  5507.3
#define B_CENTRE  0.10237
#define VACUUM_MU 1.25663706212e-6
#define PROFILE   221

static double half_length(enum plane_kind kind)
{
    return plane_kind_is_magnetic(kind) ? 0.0605 : 0.0572;
}

static double half_gap(enum plane_kind kind)
{
    return plane_kind_is_magnetic(kind) ? 0.0203 : 0.0101;
}

static double fall(enum plane_kind kind, double z)
{
    double width = half_gap(kind) * 0.7, edge = half_length(kind);
    return 0.5 * (tanh((z + edge) / width) - tanh((z - edge) / width));
}

static double central(enum plane_kind kind)
{
    return plane_kind_is_magnetic(kind) ? B_CENTRE : E_CENTRE;
}

double fixture_potential(enum plane_kind kind, double a, double b)
{
    double scale = central(kind) / (plane_kind_is_magnetic(kind) ? VACUUM_MU : 1);
    double g = half_gap(kind);
    if (plane_kind_is_along(kind))
        return -scale * fall(kind, a) * fmax(-g, fmin(g, b));
    double across = kind == PLANE_ELECTRIC_ACROSS ? a : b;
    return -scale * fmax(-g, fmin(g, across)) * (1 + 1.3 * a * b);
}

double fixture_field(enum plane_kind kind, int component, double a, double b)
{
    if (plane_kind_is_along(kind))
        return component ? central(kind) * fall(kind, a) : 0.013 * central(kind) * b;
    bool main = (kind == PLANE_ELECTRIC_ACROSS) == (component == 0);
    return central(kind) * (main ? 1 + 21.7 * (a * a - b * b) : 3.1 * a * b);
}

static struct vec2 box_corner(enum plane_kind kind, int sign)
{
    double length = plane_kind_is_along(kind) ? half_length(kind) : 0.0311;
    double inner = half_gap(kind), outer = inner + 0.0043;
    double across = sign > 0 ? outer : inner;
    if (kind == PLANE_ELECTRIC_ACROSS)
        return (struct vec2){across, sign * length};
    return (struct vec2){sign * length, across};
}

static void make_part(struct part *part, enum plane_kind kind, int which)
{
    static const char *const names[2][2] = {{"upper plate", "lower <plate> & 'co'"},
                                            {"north pole", "south pole"}};
    bool magnetic = plane_kind_is_magnetic(kind);
    part->name = mem_text(names[magnetic][which]);
    part->kind = magnetic ? PART_POLE : PART_ELECTRODE;
    part->potential.constant = (which ? 1 : -1) * 55.6;
    struct vec2 raise = {0, which && plane_kind_is_turned(kind) ? 0.0157 : 0};
    assert_int_equal(shape_init_box(&part->shape, vec2_add(box_corner(kind, -1), raise),
                                    vec2_add(box_corner(kind, 1), raise), 0.0011),
                     STATUS_OK);
    if (which && !plane_kind_is_turned(kind))
        shape_mirror(&part->shape, kind == PLANE_ELECTRIC_ACROSS,
                     kind != PLANE_ELECTRIC_ACROSS);
}

/* The second plate gets a bore and a notch, for the outlines. */
static void cut_part(struct part *part)
{
    struct shape bore = {0}, notch = {0};
    assert_int_equal(shape_init_disc(&bore, (struct vec2){0.0201, -0.0122}, 0.0013),
                     STATUS_OK);
    assert_int_equal(shape_init_box(&notch, (struct vec2){-0.0303, -0.0163},
                                    (struct vec2){-0.0202, -0.0131}, 0),
                     STATUS_OK);
    assert_int_equal(shape_cut(&part->shape, &bore), STATUS_OK);
    assert_int_equal(shape_cut(&part->shape, &notch), STATUS_OK);
    shape_free(&bore);
    shape_free(&notch);
}

static void make_plane(struct plane *plane, enum plane_kind kind)
{
    bool along = plane_kind_is_along(kind);
    plane->present = true;
    plane->kind = kind;
    plane->high = (struct vec2){along ? 0.14 : 0.05, 0.0507};
    plane->low = vec2_scale(plane->high, -1);
    if (plane_kind_is_turned(kind))
        plane->low.b = 0; /* the axis; two rings instead of two plates */
    plane->parts = MEM_NEW(2, struct part);
    assert_non_null(plane->parts);
    plane->part_count = 2;
    for (int k = 0; k < 2; k++)
        make_part(&plane->parts[k], kind, k);
    if (kind == PLANE_ELECTRIC_ALONG)
        cut_part(&plane->parts[1]);
}

/* Lines closer together in the middle. */
static double *make_lines(double low, double high, int count)
{
    double *lines = MEM_NEW((size_t)count, double);
    assert_non_null(lines);
    for (int k = 0; k < count; k++) {
        double t = 2.0 * k / (count - 1) - 1;
        lines[k] = 0.5 * (low + high) + 0.5 * (high - low) * t * (0.4 + 0.6 * t * t);
    }
    return lines;
}

static int find_owner(const struct plane *plane, struct vec2 at)
{
    for (size_t k = 0; k < plane->part_count; k++)
        if (shape_contains(&plane->parts[k].shape, at, 0))
            return (int)k;
    if (at.a == plane->low.a)
        return OWNER_SIDE - SIDE_A_LOW;
    return OWNER_FREE;
}

static void fill_node(struct plane_result *result, const struct plane *plane, int i,
                      int j)
{
    struct grid *grid = &result->grid;
    size_t k = (size_t)j * NA + (size_t)i;
    struct vec2 at = {grid->a[i], grid->b[j]};
    grid->owner[k] = find_owner(plane, at);
    bool inside = grid->owner[k] >= 0;
    result->potential[k] = fixture_potential(plane->kind, at.a, at.b);
    result->field_a[k] = inside ? 0 : fixture_field(plane->kind, 0, at.a, at.b);
    result->field_b[k] = inside ? 0 : fixture_field(plane->kind, 1, at.a, at.b);
}

static void make_plane_result(struct plane_result *result, const struct plane *plane)
{
    result->present = true;
    result->levels = 2;
    result->quality[0] =
        (struct quality){311, 2.3e-16, 4.1e-5, 3.2e-11, 0.17, 1e6, 0, 0};
    result->quality[1] =
        (struct quality){1151, 3.7e-16, 1.3e-6, 5.3e-12, 0.63, 4e6, 0, 0};
    struct grid *grid = &result->grid;
    grid->plane = plane;
    grid->na = NA;
    grid->nb = NB;
    grid->a = make_lines(plane->low.a, plane->high.a, NA);
    grid->b = make_lines(plane->low.b, plane->high.b, NB);
    grid->owner = MEM_NEW(NODES, int);
    result->potential = MEM_NEW(NODES, double);
    result->field_a = MEM_NEW(NODES, double);
    result->field_b = MEM_NEW(NODES, double);
    assert_true(grid->owner && result->potential && result->field_a && result->field_b);
    for (int j = 0; j < NB; j++)
        for (int i = 0; i < NA; i++)
            fill_node(result, plane, i, j);
}

static double *new_column(size_t count)
{
    double *column = MEM_NEW(count, double);
    assert_non_null(column);
    return column;
}

static void make_profile(struct profile *profile)
{
    double **const columns[] = {&profile->z,
                                &profile->e_x,
                                &profile->e_x_err,
                                &profile->b_y,
                                &profile->b_y_err,
                                &profile->ratio_error,
                                &profile->ratio_error_err,
                                &profile->bundle_low,
                                &profile->bundle_high,
                                &profile->imbalance};
    for (size_t k = 0; k < sizeof columns / sizeof columns[0]; k++)
        *columns[k] = new_column(PROFILE);
    profile->defined = MEM_NEW(PROFILE, bool);
    profile->present = profile->has_bundle = true;
    profile->count = PROFILE;
    profile->reference_speed = E_CENTRE / B_CENTRE;
    for (int k = 0; k < PROFILE; k++) {
        double z = profile->z[k] = -0.11 + 0.001 * k;
        double e = profile->e_x[k] = fixture_field(PLANE_ELECTRIC_ALONG, 1, z, 0);
        double b = profile->b_y[k] = fixture_field(PLANE_MAGNETIC_ALONG, 1, z, 0);
        profile->e_x_err[k] = 0.37;
        profile->b_y_err[k] = 2.9e-6;
        profile->imbalance[k] = e / E_CENTRE - b / B_CENTRE;
        profile->defined[k] = fabs(z) < 0.0701;
        if (!profile->defined[k])
            continue;
        profile->ratio_error[k] = e / b / profile->reference_speed - 1;
        profile->ratio_error_err[k] = 7.1e-5;
        profile->bundle_low[k] = profile->ratio_error[k] - 2.3e-4;
        profile->bundle_high[k] = profile->ratio_error[k] + 5.9e-4;
    }
}

static void make_section(struct section *section)
{
    enum { N = 25 };
    section->present = true;
    section->nx = section->ny = N;
    section->x = new_column(N);
    section->y = new_column(N);
    section->ratio_error = new_column((size_t)N * N);
    for (int k = 0; k < N; k++) {
        section->x[k] = 3.1e-3 * (k - 12) / 12;
        section->y[k] = 2.7e-3 * (k - 12) / 12;
    }
    for (int j = 0; j < N; j++) {
        for (int i = 0; i < N; i++) {
            double x = section->x[i], y = section->y[j];
            section->ratio_error[j * N + i] = 211 * (x * x - y * y) + 9e3 * x * x * y;
        }
    }
}

static void make_lattice(struct lattice_field *lattice)
{
    const size_t count = 24; /* 3 by 2 by 4 */
    *lattice = (struct lattice_field){
        .present = true,
        .n = {3, 2, 4},
        .origin = {-0.0013, -0.0021, -0.0307},
        .step = {0.0013, 0.0042, 0.0105},
        .has_electric = true,
        .has_magnetic = true,
        .electric_from = PLANE_ELECTRIC_ALONG,
        .magnetic_from = PLANE_MAGNETIC_ALONG,
    };
    for (int axis = 0; axis < 3; axis++) {
        lattice->e[axis] = new_column(count);
        lattice->b[axis] = new_column(count);
        for (size_t k = 0; k < count; k++) {
            lattice->e[axis][k] = 101.7 * axis + 3.3 * (double)k;
            lattice->b[axis][k] = 0.0103 * axis - 0.00017 * (double)k;
        }
    }
    for (int c = 0; c < 2; c++) { /* 4 along z by 3 along x, 4 along z by 2 along y */
        lattice->e_err[c] = new_column(12);
        lattice->b_err[c] = new_column(8);
        for (int k = 0; k < 12; k++)
            lattice->e_err[c][k] = 1.234e-3 * (c + 1) * (k + 1);
        for (int k = 0; k < 8; k++)
            lattice->b_err[c][k] = 5.67e-10 * (2 * c + 1) * (k + 1);
    }
    lattice->solid = MEM_NEW(count, unsigned char);
    lattice->solid[5] = 1;
}

static void add(struct result *result, struct figure figure, const char *subject,
                const char *note)
{
    assert_int_equal(figures_add(&result->figures, &figure, subject, note), STATUS_OK);
}

static void make_figures(struct result *result)
{
    unsigned both = 1U << PLANE_ELECTRIC_ALONG | 1U << PLANE_MAGNETIC_ALONG;
    unsigned across = 1U << PLANE_ELECTRIC_ACROSS | 1U << PLANE_MAGNETIC_ACROSS;
    add(result,
        (struct figure){.name = "wanted_speed",
                        .title = "wanted speed",
                        .unit = "m/s",
                        .group = FIGURE_BEAM,
                        .value = 53887.12},
        NULL, NULL);
    add(result,
        (struct figure){.name = "centre_pass_speed",
                        .title = "pass speed at the centre",
                        .unit = "m/s",
                        .group = FIGURE_ALONG,
                        .planes = both,
                        .value = 53798.0,
                        .uncertainty = 2.3,
                        .grid_count = 3,
                        .grids = {53811.7, 53801.3, 53798.8}},
        NULL, "reference point z = 0 mm, x = 0 mm, y = 0 mm");
    add(result,
        (struct figure){.name = "fringe_integral",
                        .title = "fringe integral",
                        .unit = "1",
                        .group = FIGURE_ALONG,
                        .state = FIGURE_UNSETTLED,
                        .planes = 1U << PLANE_ELECTRIC_ALONG,
                        .value = 0.183,
                        .uncertainty = 0.02,
                        .scale = 1,
                        .grid_count = 3,
                        .grids = {0.17, 0.19, 0.183}},
        "E, exit", "the three grids do not converge: 0.17, 0.19, 0.183");
    add(result,
        (struct figure){.name = "even_radius",
                        .title = "even radius",
                        .unit = "m",
                        .group = FIGURE_ACROSS,
                        .planes = across,
                        .value = 2.17e-3,
                        .uncertainty = 1.1e-5,
                        .grid_count = 3,
                        .grids = {2.31e-3, 2.203e-3, 2.178e-3}},
        NULL, NULL);
    add(result,
        (struct figure){.name = "capacitance",
                        .title = "capacitance per length",
                        .unit = "F/m",
                        .group = FIGURE_HARDWARE,
                        .state = FIGURE_MISSING},
        "upper plate", "needs plane electric_across, which is not in the file");
}

static void make_verdict(struct result *result)
{
    static const char *const reasons[] = {
        "the value with its uncertainty stays below the limit",
        "the kick cannot be judged without magnetic_along"};
    result->verdict.count = 2;
    result->verdict.items[0] = (struct verdict_item){
        .limit = LIMIT_RATIO_ERROR,
        .allowed = 1e-3,
        .figure = figures_find(&result->figures, "even_radius", NULL),
        .value = 8.13e-4,
        .uncertainty = 2.1e-5,
        .judged = true,
        .met = true};
    result->verdict.items[1] =
        (struct verdict_item){.limit = LIMIT_KICK, .allowed = 1.5e-3};
    for (int k = 0; k < 2; k++)
        result->verdict.items[k].reason = mem_text(reasons[k]);
}

static void make_probes(struct result *result)
{
    result->probes = MEM_NEW(2, struct probe_reading);
    assert_non_null(result->probes);
    result->probe_count = 2;
    result->probes[0] = (struct probe_reading){.probe = 0,
                                               .plane = PLANE_ELECTRIC_ALONG,
                                               .at = {0.0123, 0.0021},
                                               .potential = -11.565,
                                               .field = {13.7, 5506.9},
                                               .potential_err = 0.003,
                                               .field_err = {0.2, 0.41},
                                               .part = -1};
    result->probes[1] = (struct probe_reading){.probe = 1,
                                               .plane = PLANE_MAGNETIC_ACROSS,
                                               .at = {0.0011, 0.0223},
                                               .potential = 1653.7,
                                               .part = 0};
}

int fixture_setup(void **state)
{
    struct fixture *fixture = calloc(1, sizeof *fixture);
    if (!fixture)
        return -1;
    fixture->geometry.path = mem_text("some/where/bench filter.yaml");
    fixture->geometry.title = mem_text("Bench filter \"A\" <2 keV> & more");
    fixture->geometry.fineness = 1;
    fixture->geometry.limits[LIMIT_RATIO_ERROR].present = true;
    fixture->geometry.limits[LIMIT_RATIO_ERROR].value = 1e-3;
    fixture->result.geometry = &fixture->geometry;
    for (int k = 0; k < PLANE_KINDS; k++) {
        make_plane(&fixture->geometry.planes[k], (enum plane_kind)k);
        make_plane_result(&fixture->result.planes[k], &fixture->geometry.planes[k]);
    }
    make_profile(&fixture->result.profile);
    make_section(&fixture->result.section);
    make_lattice(&fixture->result.lattice);
    make_figures(&fixture->result);
    make_verdict(&fixture->result);
    make_probes(&fixture->result);
    strcpy(fixture->folder, "/tmp/evengap-test-XXXXXX");
    *state = fixture;
    return mkdtemp(fixture->folder) ? 0 : -1;
}

static void remove_tree(const char *path)
{
    char inner[512];
    DIR *directory = opendir(path);
    for (struct dirent *entry; directory && (entry = readdir(directory));) {
        struct stat found;
        if (strcmp(entry->d_name, ".") == 0 || strcmp(entry->d_name, "..") == 0)
            continue;
        (void)snprintf(inner, sizeof inner, "%s/%s", path, entry->d_name);
        if (lstat(inner, &found) == 0 && S_ISDIR(found.st_mode))
            remove_tree(inner);
        else
            (void)unlink(inner);
    }
    if (directory)
        (void)closedir(directory);
    (void)rmdir(path);
}

int fixture_teardown(void **state)
{
    struct fixture *fixture = *state;
    remove_tree(fixture->folder);
    if (fixture->path)
        assert_int_equal(setenv("PATH", fixture->path, 1), 0);
    mem_free(fixture->path);
    result_free(&fixture->result);
    geometry_free(&fixture->geometry);
    messages_free(&fixture->messages);
    free(fixture);
    return 0;
}

void capture_open(struct capture *capture)
{
    *capture = (struct capture){0};
    capture->stream = open_memstream(&capture->text, &capture->length);
    assert_non_null(capture->stream);
    sink_wrap(&capture->sink, capture->stream);
}

void capture_close(struct capture *capture)
{
    assert_int_equal(sink_close(&capture->sink, NULL), STATUS_OK);
    assert_int_equal(fclose(capture->stream), 0);
    capture->stream = NULL;
}

void capture_free(struct capture *capture)
{
    if (capture->stream)
        (void)fclose(capture->stream);
    free(capture->text);
}

const char *fixture_path(const struct fixture *fixture, const char *name)
{
    static char paths[4][256];
    static int turn;
    turn = (turn + 1) % 4;
    (void)snprintf(paths[turn], sizeof paths[turn], "%s/%s", fixture->folder, name);
    return paths[turn];
}

char *fixture_read(const char *path)
{
    FILE *file = fopen(path, "rb");
    if (!file)
        return NULL;
    char *text = NULL;
    size_t length = 0;
    FILE *memory = open_memstream(&text, &length);
    for (int c; (c = getc(file)) != EOF;)
        (void)putc(c, memory);
    (void)fclose(file);
    (void)fclose(memory);
    return text;
}

void fixture_write(const char *path, const char *text)
{
    FILE *file = fopen(path, "w");
    assert_non_null(file);
    assert_true(fputs(text, file) >= 0);
    assert_int_equal(fclose(file), 0);
}

int fixture_entries(const char *path)
{
    DIR *directory = opendir(path);
    if (!directory)
        return -1;
    int count = -2;
    while (readdir(directory))
        count++;
    (void)closedir(directory);
    return count;
}

void fixture_show_scripts(struct fixture *fixture)
{
    const char *folder = fixture_path(fixture, "bin");
    const char *program = fixture_path(fixture, "bin/gnuplot");
    assert_int_equal(mkdir(folder, 0777), 0);
    fixture_write(program, "#!/bin/sh\n/bin/cat \"$2\"\necho '# </svg>'\n");
    assert_int_equal(chmod(program, 0755), 0);
    fixture->path = mem_text(getenv("PATH"));
    assert_int_equal(setenv("PATH", folder, 1), 0);
}
