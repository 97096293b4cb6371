/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/finish_list.h"

#include <string.h>

static void
count_starter(HwRiderCheck *check, const HwFinishRow *row)
{
    switch (row->status) {
    case HW_STATUS_DNS:
        check->dns++;
        return;
    case HW_STATUS_LAP:
        check->lap++;
        return;
    case HW_STATUS_OTL:
        check->otl++;
        return;
    case HW_STATUS_DNF:
        check->dnf++;
        return;
    case HW_STATUS_ABD:
        check->abd++;
        return;
    case HW_STATUS_DSQ:
        check->dsq++;
        return;
    case HW_STATUS_OK:
    case HW_STATUS_NOT_SEEN:
    case HW_STATUS_UNKNOWN:
        break;
    }
    if (row->rank > 0)
        check->ranked++;
    else
        check->missing++;
}

HwRiderCheck
hw_rider_check_make(const HwFinishList *list, const HwStartList *start_list, const char *team)
{
    HwRiderCheck check = { 0 };
    for (guint i = 0; start_list != NULL && i < start_list->riders->len; i++) {
        const HwRider *rider = g_ptr_array_index(start_list->riders, i);
        check.entered += team == NULL || strcmp(rider->team, team) == 0;
    }
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        if (!row->in_start_list) {
            /* Nobody's team: they belong to the account of all alone. */
            check.unnamed += team == NULL && row->unnamed;
            check.not_in_list += team == NULL && !row->unnamed && start_list != NULL;
        } else if (team == NULL || strcmp(row->team, team) == 0) {
            count_starter(&check, row);
        }
    }
    check.starters = check.entered - check.dns;
    return check;
}
