/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/groups.h"

#include <glib.h>
#include <math.h>

/* Between which instants the back of a rear wheel reached the line. */
typedef struct {
    int64_t earliest_ns;
    int64_t latest_ns;
} RearBounds;

static RearBounds
rear_bounds(const HwGroupRider *rider, double length_m)
{
    if (rider->has_rear)
        return (RearBounds){ rider->rear_ns, rider->rear_ns };
    double lowest_mps = isnan(rider->speed_mps) ? HW_WALKING_MPS : fmax(rider->speed_mps, HW_WALKING_MPS);
    int64_t longest_ns = (int64_t)ceil(length_m / lowest_mps * 1e9);
    return (RearBounds){ rider->front_ns, rider->front_ns + longest_ns };
}

/* A rider towards the group whose latest rear edge lies within `group`. */
static HwGroupState
state_towards(const RearBounds *group, const HwGroupRider *last, const HwGroupRider *rider, int64_t limit_ns)
{
    int64_t most_ns = rider->front_ns - group->earliest_ns;
    int64_t least_ns = rider->front_ns - group->latest_ns;
    if (group->earliest_ns >= group->latest_ns)
        return most_ns < limit_ns ? HW_GROUP_SAME : HW_GROUP_NEW;
    int64_t expanded_ns = (int64_t)ceil(2.0 * hypot(rider->u_ns, last->u_ns));
    if (most_ns < limit_ns - expanded_ns)
        return HW_GROUP_SAME;
    return least_ns >= limit_ns + expanded_ns ? HW_GROUP_NEW : HW_GROUP_REAR_NEEDED;
}

void
hw_groups_find(const HwGroupRider *riders, int n, const HwGroupRule *rule, HwGroupState *states, int *needs)
{
    RearBounds group = { 0, 0 }; /* of the latest rear edge of the group so far */
    int latest = -1;             /* whose rear edge can be the latest */
    bool breakaway_leads = rule->breakaway_gap_ns > 0;
    for (int i = 0; i < n; i++) {
        states[i] = HW_GROUP_NEW;
        needs[i] = -1;
        if (i > 0) {
            breakaway_leads = breakaway_leads && riders[i - 1].in_breakaway;
            int64_t limit_ns = breakaway_leads ? rule->breakaway_gap_ns : rule->gap_ns;
            states[i] = state_towards(&group, &riders[i - 1], &riders[i], limit_ns);
            if (states[i] == HW_GROUP_REAR_NEEDED)
                needs[i] = latest;
        }

        RearBounds own = rear_bounds(&riders[i], rule->length_m);
        if (states[i] == HW_GROUP_NEW || own.latest_ns >= group.latest_ns)
            latest = i;
        if (states[i] == HW_GROUP_NEW) {
            group = own;
        } else {
            /* An undecided rider may have begun a group of its own: then only its own rear edge counts. */
            group.earliest_ns =
                states[i] == HW_GROUP_REAR_NEEDED ? own.earliest_ns : MAX(group.earliest_ns, own.earliest_ns);
            group.latest_ns = MAX(group.latest_ns, own.latest_ns);
        }
    }
}
