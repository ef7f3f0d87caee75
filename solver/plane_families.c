/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The unit of work is one plane on one grid. Finest grids first: they take longest, and
 * short work then fills the gaps. Workers take the next piece from a shared counter;
 * every piece has its own messages. */

#include "solver/plane_families.h"

#include <stdatomic.h>
#include <stdio.h>
#include <threads.h>
#include <unistd.h>

enum { PIECES_MAX = RESULT_LEVELS_MAX * PLANE_KINDS, THREADS_MAX = 8, STAGE_SIZE = 80 };

struct piece {
    enum plane_kind kind;
    int level;
    double work; /* share of all work */
    enum status status;
    struct messages messages;
};

struct shop {
    const struct family_order *order;
    struct plane_solution (*solutions)[PLANE_KINDS];
    struct piece pieces[PIECES_MAX];
    int count;
    atomic_int next;
    atomic_bool failed;
    mtx_t lock; /* of done and of the progress callback */
    double done;
};

static void plan(struct shop *shop)
{
    double all = 0.0;
    for (int l = shop->order->levels - 1; l >= 0; l--)
        for (int k = 0; k < PLANE_KINDS; k++)
            if (shop->order->geometry->planes[k].present) {
                /* Work grows about fourfold from grid to grid. */
                const double work = (double)(1 << (2 * l));
                shop->pieces[shop->count++] =
                    (struct piece){.kind = (enum plane_kind)k, .level = l, .work = work};
                all += work;
            }
    for (int p = 0; p < shop->count; p++)
        shop->pieces[p].work /= all;
}

static void tell(struct shop *shop, const struct piece *piece, bool finished)
{
    const struct family_order *order = shop->order;
    char stage[STAGE_SIZE];
    (void)mtx_lock(&shop->lock);
    if (finished)
        shop->done += piece->work;
    (void)snprintf(stage, sizeof stage, "%s, grid %d of %d", plane_kind_key(piece->kind),
                   piece->level + 1, order->levels);
    if (order->progress != NULL)
        order->progress(order->context, stage, shop->done);
    (void)mtx_unlock(&shop->lock);
}

static int work(void *data)
{
    struct shop *shop = data;
    for (;;) {
        const int p = atomic_fetch_add(&shop->next, 1);
        if (p >= shop->count || atomic_load(&shop->failed))
            return 0;
        struct piece *piece = &shop->pieces[p];
        tell(shop, piece, false);
        piece->status = plane_solve(shop->order->geometry, piece->kind,
                                    shop->order->fineness, piece->level,
                                    &shop->solutions[piece->level][piece->kind],
                                    &piece->messages);
        if (piece->status != STATUS_OK)
            atomic_store(&shop->failed, true);
        tell(shop, piece, true);
    }
}

static int thread_count(const struct shop *shop)
{
    long threads = shop->order->threads;
    if (threads <= 0)
        threads = sysconf(_SC_NPROCESSORS_ONLN);
    if (threads > THREADS_MAX)
        threads = THREADS_MAX;
    if (threads > shop->count)
        threads = shop->count;
    return threads < 1 ? 1 : (int)threads;
}

static void run_workers(struct shop *shop)
{
    thrd_t threads[THREADS_MAX];
    const int wanted = thread_count(shop);
    int started = 0;
    /* This thread works too; one that cannot be started is done without. */
    while (started < wanted - 1 &&
           thrd_create(&threads[started], work, shop) == thrd_success)
        started++;
    (void)work(shop);
    for (int t = 0; t < started; t++)
        (void)thrd_join(threads[t], NULL);
}

/* Coarse grids first, planes in order: a mistake found on several grids is told once. */
static enum status collect(struct shop *shop, struct messages *messages)
{
    enum status status = STATUS_OK;
    for (int p = shop->count - 1; p >= 0; p--) {
        struct piece *piece = &shop->pieces[p];
        if (status == STATUS_OK && piece->status != STATUS_OK) {
            status = piece->status;
            messages_move(messages, &piece->messages);
        }
        messages_free(&piece->messages);
    }
    return status;
}

enum status plane_families_solve(
    const struct family_order *order,
    struct plane_solution solutions[RESULT_LEVELS_MAX][PLANE_KINDS],
    struct messages *messages)
{
    struct shop shop = {.order = order, .solutions = solutions};
    if (mtx_init(&shop.lock, mtx_plain) != thrd_success)
        return STATUS_MEMORY;
    plan(&shop);
    run_workers(&shop);
    mtx_destroy(&shop.lock);
    return collect(&shop, messages);
}
