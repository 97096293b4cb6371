/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Does nothing: that this program could be linked is the test. */
#include <stdio.h>

int
main(void)
{
    puts("1..1");
    puts("ok 1 - " FLOOR "_links_with_the_floors_before_it_only");
    return 0;
}
