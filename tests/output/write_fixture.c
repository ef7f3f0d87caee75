/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Writes the hand-made result to the folder argv[1], for readers in other languages. */

#include "output/result_folder.h"
#include "tests/output/fixture.h"

int main(int argc, char *argv[])
{
    void *state = NULL;
    if (argc != 2 || fixture_setup(&state))
        return 2;
    struct fixture *fixture = state;
    enum status status =
        result_folder_write(&fixture->result, argv[1], &fixture->messages);
    for (size_t k = 0; k < fixture->messages.count; k++)
        (void)fprintf(stderr, "%s\n", fixture->messages.items[k].text);
    (void)fixture_teardown(&state);
    return status ? 1 : 0;
}
