/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The beam: the wanted particle, its path, and the width over which the ratio counts. */
#include <math.h>
#include <stdio.h>

#include "mesh/reader_sections.h"
#include "shared/constants.h"

static const struct wanted wanted_mass = {{0, 1, 0, 0, 0}, "a mass such as 40 u"};
static const struct wanted wanted_charge = {{0, 0, 1, 1, 0}, "a charge such as 1 e"};
static const struct wanted wanted_energy = {{2, 1, -2, 0, 0},
                                            "an energy such as 2 keV"};
static const struct wanted wanted_speed = {{1, 0, -1, 0, 0}, "a speed such as 50 km/s"};

/* Speed (m/s) from kinetic energy over rest energy, t = gamma - 1, free of cancellation
 * for slow particles: v/c = sqrt(t (t + 2)) / (1 + t). */
static double speed_from_energy(double t)
{
    return SPEED_OF_LIGHT * sqrt(t * (t + 2)) / (1 + t);
}

/* The inverse: gamma - 1 = beta^2 / (s (1 + s)) with s = sqrt(1 - beta^2). */
static double energy_from_speed(double speed)
{
    double beta = speed / SPEED_OF_LIGHT;
    double s = sqrt((1 - beta) * (1 + beta));
    return beta * beta / (s * (1 + s));
}

static bool read_motion(struct reader *reader, const struct node *energy,
                        const struct node *speed, struct beam *beam)
{
    double rest = beam->mass * SPEED_OF_LIGHT * SPEED_OF_LIGHT;
    if (energy != NULL) {
        if (!reader_positive(reader, energy, "energy", &wanted_energy, &beam->energy))
            return false;
        beam->speed = speed_from_energy(beam->energy / rest);
        return true;
    }
    if (!reader_positive(reader, speed, "speed", &wanted_speed, &beam->speed))
        return false;
    if (!(beam->speed < SPEED_OF_LIGHT))
        return reader_expected(reader, speed, "speed", "less than the speed of light");
    beam->energy = rest * energy_from_speed(beam->speed);
    return true;
}

static bool read_charge(struct reader *reader, const struct node *node, double *charge)
{
    if (!reader_quantity(reader, node, "charge", &wanted_charge, charge))
        return false;
    return *charge != 0 ||
           reader_expected(reader, node, "charge", "a charge other than 0");
}

static bool is_complete(struct reader *reader, const struct node *node,
                        const struct node *mass, const struct node *charge,
                        const struct node *energy, const struct node *speed)
{
    if (energy != NULL && speed != NULL)
        return mistakes_add(&reader->mistakes, speed->place,
                            "the beam has both \"energy\" and \"speed\"; expected one "
                            "of them");
    if (mass != NULL && charge != NULL && (energy != NULL || speed != NULL))
        return true;
    return mistakes_add(
        &reader->mistakes, node->place,
        "the particle of the beam is not complete; expected \"mass\", "
        "\"charge\" and one of \"energy\" and \"speed\"; missing:%s%s%s",
        mass == NULL ? " mass" : "", charge == NULL ? " charge" : "",
        energy == NULL && speed == NULL ? " energy (or speed)" : "");
}

static void read_particle(struct reader *reader, const struct node *node,
                          struct beam *beam)
{
    const struct node *mass = node_find(node, "mass");
    const struct node *charge = node_find(node, "charge");
    const struct node *energy = node_find(node, "energy");
    const struct node *speed = node_find(node, "speed");
    if (mass == NULL && charge == NULL && energy == NULL && speed == NULL)
        return;
    if (!is_complete(reader, node, mass, charge, energy, speed))
        return;
    bool ok = reader_positive(reader, mass, "mass", &wanted_mass, &beam->mass);
    ok = read_charge(reader, charge, &beam->charge) && ok;
    beam->has_particle = ok && read_motion(reader, energy, speed, beam);
}

/* Both lengths of a mapping with two keys; NULL-terminated keys. */
static bool read_pair(struct reader *reader, const struct node *node, const char *what,
                      const char *const *keys, double *first, double *second)
{
    double *const values[] = {first, second};
    bool ok = reader_mapping(reader, node, what, keys);
    for (int k = 0; k < 2; k++) {
        const struct node *item = node_find(node, keys[k]);
        if (item == NULL)
            return mistakes_add(&reader->mistakes, node->place,
                                "\"%s\" lacks \"%s\"; expected {%s: ..., %s: ...}",
                                what, keys[k], keys[0], keys[1]);
        ok = reader_quantity(reader, item, keys[k], &wanted_length, values[k]) && ok;
    }
    return ok;
}

static void read_path(struct reader *reader, const struct node *node, struct beam *beam)
{
    static const char *const keys[] = {"from", "to", NULL};
    if (!read_pair(reader, node, "path", keys, &beam->path_from, &beam->path_to))
        return;
    beam->has_path = beam->path_from < beam->path_to;
    if (!beam->has_path)
        (void)mistakes_add(&reader->mistakes, node->place,
                           "the path ends before it starts; expected \"from\" below "
                           "\"to\"; found %g mm to %g mm",
                           beam->path_from * 1e3, beam->path_to * 1e3);
}

static void read_footprint(struct reader *reader, const struct node *node,
                           struct beam *beam)
{
    static const char *const keys[] = {"x", "y", NULL};
    if (!read_pair(reader, node, "footprint", keys, &beam->half_x, &beam->half_y))
        return;
    beam->has_footprint = beam->half_x > 0 && beam->half_y > 0;
    if (!beam->has_footprint)
        (void)mistakes_add(&reader->mistakes, node->place,
                           "the footprint is empty; expected half widths greater than "
                           "0; found x %g mm, y %g mm",
                           beam->half_x * 1e3, beam->half_y * 1e3);
}

static void read_slit(struct reader *reader, const struct node *node, struct beam *beam)
{
    static const char *const keys[] = {"at", "width", NULL};
    if (!read_pair(reader, node, "slit", keys, &beam->slit_at, &beam->slit_width))
        return;
    beam->has_slit = beam->slit_width > 0;
    if (!beam->has_slit)
        (void)mistakes_add(&reader->mistakes, node->place,
                           "the slit is closed; expected a width greater than 0; found "
                           "%g mm",
                           beam->slit_width * 1e3);
}

void reader_beam(struct reader *reader, const struct node *node)
{
    static const char *const keys[] = {"mass", "charge",    "energy", "speed",
                                       "path", "footprint", "slit",   NULL};
    struct beam *beam = &reader->geometry->beam;
    if (node == NULL)
        return;
    beam->place = node->place;
    (void)reader_mapping(reader, node, "beam", keys);
    read_particle(reader, node, beam);
    if (node_find(node, "path") != NULL)
        read_path(reader, node_find(node, "path"), beam);
    if (node_find(node, "footprint") != NULL)
        read_footprint(reader, node_find(node, "footprint"), beam);
    if (node_find(node, "slit") != NULL)
        read_slit(reader, node_find(node, "slit"), beam);
}
