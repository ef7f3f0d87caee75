/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Names of parts: where they come to stand, read from the script. */

#include <stdlib.h>
#include <string.h>

#include "output/picture.h"
#include "shared/mem.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

enum { STRIPS = 7 };
#define LINE 18.0

struct scene {
    struct plane plane;
    struct frame frame;
};

/* Strips 1.6 mm long, 3 mm apart: far closer than their names are long. */
static void begin(struct scene *scene, int count)
{
    *scene = (struct scene){.plane = {.present = true,
                                      .kind = PLANE_ELECTRIC_ACROSS,
                                      .low = {-0.06, -0.022},
                                      .high = {0.06, 0.022},
                                      .part_count = (size_t)count}};
    scene->plane.parts = MEM_NEW((size_t)count, struct part);
    assert_non_null(scene->plane.parts);
    for (int k = 0; k < count; k++) {
        const int middle = count / 2;
        const double a = 3e-3 * (k - middle);
        char name[32];
        (void)snprintf(name, sizeof name, "strip number %d", k);
        scene->plane.parts[k].name = mem_text(name);
        assert_int_equal(shape_init_box(&scene->plane.parts[k].shape,
                                        (struct vec2){a - 0.8e-3, 0.013},
                                        (struct vec2){a + 0.8e-3, 0.014}, 0),
                         STATUS_OK);
    }
    scene->frame = picture_frame(scene->plane.low, scene->plane.high, "x", "y", 140, 0);
}

static void end(struct scene *scene)
{
    for (size_t k = 0; k < scene->plane.part_count; k++) {
        mem_free(scene->plane.parts[k].name);
        shape_free(&scene->plane.parts[k].shape);
    }
    mem_free(scene->plane.parts);
}

static char *names_of(const struct scene *scene)
{
    struct capture capture;
    capture_open(&capture);
    picture_names(&capture.sink, &scene->plane, &scene->frame);
    capture_close(&capture);
    return capture.text;
}

/* Place of the label of a part in pixels. */
static struct vec2 label_at(const struct scene *scene, const char *script, size_t k)
{
    char mark[64];
    (void)snprintf(mark, sizeof mark, "set label '%s' at ", scene->plane.parts[k].name);
    const char *at = strstr(script, mark);
    assert_non_null(at);
    char *next;
    const double scale = picture_scale(&scene->frame) * 1e-3;
    double x = strtod(at + strlen(mark), &next);
    double y = strtod(next + 1, NULL);
    return (struct vec2){x * scale, y * scale};
}

static void test_names_hide_neither_each_other_nor_small_parts(void **state)
{
    (void)state;
    struct scene scene;
    begin(&scene, STRIPS);
    char *script = names_of(&scene);
    const double width = 14 * 7.0, row = 13.5e-3 * picture_scale(&scene.frame);
    for (size_t k = 0; k < STRIPS; k++) {
        const struct vec2 p = label_at(&scene, script, k);
        for (size_t m = k + 1; m < STRIPS; m++) {
            const struct vec2 q = label_at(&scene, script, m);
            assert_true(fabs(p.a - q.a) > width || fabs(p.b - q.b) > LINE - 1e-6);
        }
        const double outside = 10e-3 * picture_scale(&scene.frame) + width / 2;
        assert_true(fabs(p.b - row) > LINE / 2 || fabs(p.a) > outside);
    }
    free(script);
    end(&scene);
}

static void test_name_that_stands_at_its_part_needs_no_thread(void **state)
{
    (void)state;
    struct scene scene;
    begin(&scene, 1);
    char *script = names_of(&scene);
    const struct vec2 at = label_at(&scene, script, 0);
    assert_close(at.a, 0, 0, 1e-6);
    assert_null(strstr(script, "set arrow"));
    free(script);
    end(&scene);
}

static void test_name_moved_away_is_tied_to_its_part(void **state)
{
    (void)state;
    struct scene scene;
    begin(&scene, STRIPS);
    char *script = names_of(&scene);
    int threads = 0;
    for (char *at = script; (at = strstr(at, "set arrow from ")) != NULL; threads++) {
        at += strlen("set arrow from ");
        const double strip = strtod(at, &at) / 3.0;
        assert_close(strip, round(strip), 0, 1e-6); /* the middle of a strip */
        assert_close(strtod(at + 1, &at), 13.5, 1e-6, 0);
    }
    assert_true(threads >= STRIPS / 2);
    free(script);
    end(&scene);
}

static void check_shortened(const char *text, size_t most, const char *want)
{
    char copy[64];
    (void)snprintf(copy, sizeof copy, "%s", text);
    picture_shorten(copy, most);
    assert_string_equal(copy, want);
}

static void test_shortening_counts_letters_not_bytes(void **state)
{
    (void)state;
    check_shortened("upper plate", 11, "upper plate");
    check_shortened("upper plate", 10, "upper p...");
    check_shortened("\xc3\xa4\xc3\xb6\xc3\xbc\xc3\x9f", 4,
                    "\xc3\xa4\xc3\xb6\xc3\xbc\xc3\x9f");
    check_shortened("\xc3\xa4\xc3\xb6\xc3\xbc\xc3\x9f!", 4, "\xc3\xa4...");
    check_shortened("", 5, "");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_names_hide_neither_each_other_nor_small_parts),
        cmocka_unit_test(test_name_that_stands_at_its_part_needs_no_thread),
        cmocka_unit_test(test_name_moved_away_is_tied_to_its_part),
        cmocka_unit_test(test_shortening_counts_letters_not_bytes),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
