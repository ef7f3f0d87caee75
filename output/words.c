/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Tables of wording, indexed by the enums they explain. */

#include "output/words.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

const char *words_group(enum figure_group group)
{
    static const char *const titles[FIGURE_GROUPS] = {
        [FIGURE_BEAM] = "Beam",
        [FIGURE_ALONG] = "Along the path",
        [FIGURE_ACROSS] = "Across the beam",
        [FIGURE_HARDWARE] = "Hardware",
    };
    return titles[group];
}

const char *words_limit(enum limit_kind kind)
{
    static const char *const titles[LIMIT_KINDS] = {
        [LIMIT_RATIO_ERROR] = "ratio error over the footprint",
        [LIMIT_FLAT_LENGTH] = "flat length",
        [LIMIT_EVEN_RADIUS] = "even radius",
        [LIMIT_DETUNING] = "detuning",
        [LIMIT_LENGTH_MISMATCH] = "mismatch of lengths",
        [LIMIT_KICK] = "kick",
        [LIMIT_OFFSET] = "offset at the exit",
        [LIMIT_RESOLUTION] = "mass resolution",
        [LIMIT_SURFACE_FIELD] = "surface field",
    };
    return titles[kind];
}

const char *words_state(enum figure_state state)
{
    static const char *const keys[] = {
        [FIGURE_GOOD] = "good",
        [FIGURE_UNSETTLED] = "unsettled",
        [FIGURE_MISSING] = "missing",
    };
    return keys[state];
}

const char *words_assumption(enum plane_kind kind)
{
    static const char *const texts[PLANE_KINDS] = {
        [PLANE_ELECTRIC_ALONG] =
            "the parts are taken as endless along y: good where they are much wider "
            "than their gap in y",
        [PLANE_ELECTRIC_ACROSS] =
            "the parts are taken as endless along z: good in the middle of parts "
            "longer than about three gaps, away from their ends",
        [PLANE_MAGNETIC_ALONG] =
            "the parts are taken as endless along x: good where they are much wider "
            "than their gap in x; no current flows in the gap, and the poles are "
            "infinitely permeable and hold fixed ampere-turns",
        [PLANE_MAGNETIC_ACROSS] =
            "the parts are taken as endless along z: good in the middle of parts "
            "longer than about three gaps, away from their ends; no current flows in "
            "the gap, and the poles are infinitely permeable and hold fixed "
            "ampere-turns",
        [PLANE_ELECTRIC_TURNED] =
            "the parts are taken as round about the axis z, the same at every angle: "
            "nothing that breaks the circle (leads, slits, posts) is seen",
    };
    return texts[kind];
}

const char *words_potential(enum plane_kind kind)
{
    return plane_kind_is_magnetic(kind) ? "magnetic potential (A)" : "potential (V)";
}

const char *words_picture(const char *name)
{
    if (strcmp(name, "convergence.svg") == 0)
        return "Convergence: a figure can be trusted where its points fall towards the "
               "left along the thin line of slope 2. The coarsest grid is the test: "
               "the "
               "final value was extrapolated from the two finest. The bar at the left "
               "is the uncertainty stated with it.";
    return NULL;
}

const char *words_caution(size_t k)
{
    static const char *const texts[] = {
        "These figures describe a computed model. They are no safety case and replace "
        "no test, inspection or approval.",
        "High voltage: electrodes, leads and supplies can kill, and their capacitance "
        "keeps a charge after switch-off. Interlock, discharge and earth before "
        "touching.",
        "Magnets: forces between poles and on loose iron grow fast as gaps close. "
        "Stray field of 0.5 mT and more can disturb pacemakers and other active "
        "implants; keep their wearers away and mark the zone.",
        "X rays: electrons stopped by metal make them, and so does high voltage in "
        "vacuum without an electron beam. Above a few kilovolts have the radiation "
        "measured and shielded.",
        "Vacuum: windows and vessels under vacuum can implode; pumped or vented gases "
        "may be toxic, flammable or asphyxiating.",
        "Follow the codes that hold where the filter is used and leave design approval "
        "and installation to people licensed for it.",
    };
    return k < sizeof texts / sizeof texts[0] ? texts[k] : NULL;
}

void words_verdict(const struct verdict *verdict, char *text, size_t size)
{
    size_t unmet = 0;
    for (size_t k = 0; k < verdict->count; k++)
        unmet += !verdict->items[k].met;
    if (verdict->count == 0)
        (void)snprintf(text, size, "no limits are given, so nothing is judged");
    else if (unmet == 0)
        (void)snprintf(text, size,
                       verdict->count == 1 ? "the limit is met"
                                           : "all %zu limits are met",
                       verdict->count);
    else
        (void)snprintf(text, size, "NOT within limits: %zu of %zu not met", unmet,
                       verdict->count);
}

const char *words_base_name(const char *path)
{
    if (!path)
        return "";
    const char *slash = strrchr(path, '/');
    return slash ? slash + 1 : path;
}

bool words_is_zero_term(const struct figure *figure)
{
    return strncmp(figure->name, "expansion_", strlen("expansion_")) == 0 &&
           figure->state != FIGURE_MISSING &&
           fabs(figure->value) + figure->uncertainty < WORDS_ZERO_TERM;
}
