/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Laying the blocks out in time: runs, and the voids between them. */
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/base/wide.h"
#include "core/strip/strip_error.h"
#include "core/strip/time_base_private.h"

#include <string.h>

/* A damaged block at the start, of which nothing tells when it was. */
typedef struct {
    int64_t n_cols;
    int64_t after_column;
    const char *reason;
} Unplaced;

typedef struct {
    HwTimeBase *base;
    int64_t offset_ns; /* from a stamp to the middle of its exposure */
    int64_t period_ns; /* rounded; a run reaches `lead` before its first centre and `trail` after its last */
    int64_t lead_ns;   /* lead + trail = period */
    int64_t trail_ns;
    int64_t void_over_ns;   /* a distance above this is a void: 1.5 periods */
    int64_t close_under_ns; /* one below this is reported: 0.5 periods */

    guint clock;
    bool in_run;         /* the last run is still growing */
    int64_t readable_ns; /* centre of the last readable column of this clock */
    bool known;          /* something of this clock stands before */
    bool centre_known;   /* … and its last column's centre is this */
    int64_t centre_ns;
    int64_t end_ns;     /* where it ends if left alone */
    bool void_open;     /* it is a void, the last of the list, that may reach to what follows */
    bool endless;       /* … and nothing but what follows tells its end */
    guint first_loose;  /* the first void since the last run */
    GArray *leading;    /* of Unplaced */
    const char *former; /* file before, for sentences */
    int64_t stamp_ns;   /* last stamp of the blocks so far, as written */
    bool any_stamp;
    guint n_close, n_steps; /* of the block in hand */
} Builder;

void
hw_time_base_add_problem(HwTimeBase *base, char *sentence)
{
    g_ptr_array_add(base->problems, sentence);
}

static const char *
keep_reason(Builder *b, char *reason)
{
    const char *kept = g_string_chunk_insert_const(b->base->reasons, reason);
    g_free(reason);
    return kept;
}

static HwVoid *
last_void(Builder *b)
{
    return &g_array_index(b->base->voids, HwVoid, b->base->voids->len - 1);
}

static HwRun *
last_run(Builder *b)
{
    return &g_array_index(b->base->runs, HwRun, b->base->runs->len - 1);
}

static void
add_void(Builder *b, HwVoidKind kind, int64_t after_column, int64_t n_cols, int64_t start_ns, int64_t end_ns,
         const char *reason)
{
    HwVoid made = { kind, after_column, n_cols, start_ns, MAX(end_ns - start_ns, 0), reason };
    g_array_append_val(b->base->voids, made);
}

static void
end_run(Builder *b)
{
    if (!b->in_run)
        return;
    last_run(b)->end_ns = b->readable_ns + b->trail_ns;
    b->in_run = false;
    b->first_loose = b->base->voids->len;
}

/* An open void ends here at the latest. */
static void
end_void(Builder *b, int64_t end_ns)
{
    if (!b->void_open)
        return;
    HwVoid *open = last_void(b);
    open->duration_ns = MAX(end_ns - open->start_ns, 0);
    b->void_open = b->endless = false;
}

/* Damage whose stamps lie too close to leave it any time: run and voids before end at the boundary. */
static void
clip_back(Builder *b, int64_t boundary_ns)
{
    if (b->base->runs->len > 0 && last_run(b)->clock == b->clock)
        last_run(b)->end_ns = MIN(last_run(b)->end_ns, boundary_ns);
    for (guint i = b->first_loose; i < b->base->voids->len; i++) {
        HwVoid *loose = &g_array_index(b->base->voids, HwVoid, i);
        int64_t end_ns = MIN(loose->start_ns + loose->duration_ns, boundary_ns);
        loose->start_ns = MIN(loose->start_ns, boundary_ns);
        loose->duration_ns = MAX(end_ns - loose->start_ns, 0);
    }
}

/* Damaged blocks before anything that has a time end where that starts. */
static void
place_leading(Builder *b, int64_t start_ns)
{
    int64_t total_ns = 0;
    for (guint i = 0; i < b->leading->len; i++)
        total_ns += hw_muldiv_known(g_array_index(b->leading, Unplaced, i).n_cols, HW_PERIOD_NUMERATOR,
                                    b->base->rate_nhz);
    int64_t from_ns = start_ns - total_ns;
    for (guint i = 0; i < b->leading->len; i++) {
        const Unplaced *lost = &g_array_index(b->leading, Unplaced, i);
        int64_t length_ns = hw_muldiv_known(lost->n_cols, HW_PERIOD_NUMERATOR, b->base->rate_nhz);
        if (lost->n_cols > 0)
            add_void(b, HW_VOID_DAMAGED, lost->after_column, lost->n_cols, from_ns, from_ns + length_ns,
                     lost->reason);
        else
            hw_time_base_add_problem(b->base,
                                     g_strdup_printf("%s; the strip goes on after it.", lost->reason));
        from_ns += length_ns;
    }
    g_array_set_size(b->leading, 0);
}

/* What follows has its first centre here: settles all before it, and gives where it starts. */
static int64_t
meet(Builder *b, int64_t first_ns, const char *file)
{
    int64_t natural_ns = first_ns - b->lead_ns;
    if (!b->known) {
        place_leading(b, natural_ns);
        return natural_ns;
    }
    end_run(b);
    if (b->centre_known && first_ns - b->centre_ns > b->void_over_ns) {
        const char *reason = keep_reason(
            b, strcmp(b->former, file) == 0 ? g_strdup_printf("no scans for a while in %s", file)
                                            : g_strdup_printf("no scans between %s and %s", b->former, file));
        end_void(b, b->end_ns);
        add_void(b, HW_VOID_NOT_SCANNED, b->base->n_columns, 0, b->end_ns, natural_ns, reason);
        return natural_ns;
    }
    if (!b->void_open)
        return b->end_ns;
    end_void(b, natural_ns);
    return natural_ns;
}

/* A stretch of columns without a void or a step inside. */
static void
add_stretch(Builder *b, const HwSegment *segment, int64_t last_ns, const char *file)
{
    HwTimeBase *base = b->base;
    int64_t distance_ns = segment->first_ns - b->readable_ns;
    bool joins = b->in_run && distance_ns <= b->void_over_ns;
    if (joins && distance_ns < b->close_under_ns)
        b->n_close++;
    if (!joins) {
        int64_t start_ns = meet(b, segment->first_ns, file);
        int64_t floor_ns = base->voids->len > b->first_loose ? last_void(b)->start_ns : start_ns;
        /* Damage whose neighbours stand too close to leave it time: it gets none, and nothing overlaps. */
        if (b->known && start_ns < floor_ns) {
            bool after_run = base->runs->len > 0 && last_run(b)->clock == b->clock;
            int64_t limit_ns = after_run ? b->readable_ns + distance_ns / 2 : segment->first_ns;
            start_ns = MIN(floor_ns, limit_ns);
            clip_back(b, start_ns);
        }
        HwRun run = { segment->first_col, 0, MIN(start_ns, segment->first_ns), 0, b->clock };
        if (base->runs->len == 0 || last_run(b)->clock != b->clock)
            g_array_append_val(base->clocks, base->runs->len);
        g_array_append_val(base->runs, run);
        g_array_append_val(base->run_segments, base->segments->len);
    }
    last_run(b)->n_cols += segment->n_cols;
    g_array_append_val(base->segments, *segment);
    base->n_columns += segment->n_cols;
    b->in_run = b->known = b->centre_known = true;
    b->void_open = b->endless = false;
    b->readable_ns = b->centre_ns = last_ns;
    b->end_ns = last_ns + b->trail_ns;
    b->former = file;
}

/* Nothing is to be joined or measured across this. */
static void
new_clock(Builder *b)
{
    end_run(b);
    end_void(b, b->end_ns);
    b->known = b->centre_known = false;
    if (b->base->runs->len > 0 && last_run(b)->clock == b->clock)
        b->clock++;
    b->first_loose = b->base->voids->len;
}

static void
add_times(Builder *b, const HwTimedBlock *block)
{
    HwTimeBase *base = b->base;
    int64_t from = 0;
    for (int64_t i = 1; i <= block->n_columns; i++) {
        int64_t step_ns = i < block->n_columns ? block->times_ns[i] - block->times_ns[i - 1] : 0;
        if (i < block->n_columns && step_ns > 0 && step_ns <= b->void_over_ns) {
            b->n_close += step_ns < b->close_under_ns;
            continue;
        }
        HwSegment segment = { .first_col = base->n_columns,
                              .n_cols = i - from,
                              .first_ns = block->times_ns[from] + b->offset_ns,
                              .times_from = base->times_ns->len,
                              .stamps = HW_STAMPS_TIMES };
        for (int64_t k = from; k < i; k++) {
            int64_t middle_ns = block->times_ns[k] + b->offset_ns;
            g_array_append_val(base->times_ns, middle_ns);
        }
        add_stretch(b, &segment, block->times_ns[i - 1] + b->offset_ns, block->file);
        if (i < block->n_columns && step_ns <= 0) {
            b->n_steps++;
            new_clock(b);
        }
        from = i;
    }
}

/* First and last stamp as written. False where nothing tells the first; *has_last likewise. */
static bool
ends_of(const HwTimeBase *base, const HwTimedBlock *block, int64_t *first_ns, int64_t *last_ns,
        bool *has_last)
{
    *first_ns = block->first_ns;
    *last_ns = block->last_ns;
    *has_last = true;
    int64_t length_ns;
    switch (block->stamps) {
    case HW_STAMPS_EVEN:
        return true;
    case HW_STAMPS_RATE:
        *has_last = block->n_columns > 0;
        *last_ns = block->first_ns;
        if (*has_last &&
            hw_muldiv_half_even(block->n_columns - 1, HW_PERIOD_NUMERATOR, base->rate_nhz, &length_ns) &&
            length_ns <= HW_MAX_STAMP_NS)
            *last_ns += length_ns;
        else if (*has_last)
            *last_ns = INT64_MAX;
        return true;
    case HW_STAMPS_TIMES:
        break;
    }
    if (block->times_ns == NULL || block->n_columns < 1)
        return false;
    *first_ns = block->times_ns[0];
    *last_ns = block->times_ns[block->n_columns - 1];
    return true;
}

static bool
steps_back(const HwTimedBlock *block)
{
    for (int64_t i = 1; block->stamps == HW_STAMPS_TIMES && i < block->n_columns; i++) {
        if (block->times_ns[i] <= block->times_ns[i - 1])
            return true;
    }
    return false;
}

/* A damaged block that nothing places: after what stands before, or before what follows. */
static void
add_unplaced(Builder *b, const HwTimedBlock *block)
{
    const char *reason = keep_reason(b, g_strdup(block->damage));
    if (!b->known) {
        Unplaced lost = { block->n_columns, b->base->n_columns, reason };
        g_array_append_val(b->leading, lost);
    } else {
        end_run(b);
        end_void(b, b->end_ns);
        int64_t start_ns = b->end_ns;
        b->end_ns += hw_muldiv_known(block->n_columns, HW_PERIOD_NUMERATOR, b->base->rate_nhz);
        add_void(b, HW_VOID_DAMAGED, b->base->n_columns, block->n_columns, start_ns, b->end_ns, reason);
        b->centre_known = false;
        b->void_open = true;
        b->endless = block->n_columns == 0;
    }
    b->base->n_columns += block->n_columns;
    b->former = block->file;
}

static void
add_damaged(Builder *b, const HwTimedBlock *block)
{
    int64_t first_ns, last_ns;
    bool has_last;
    if (!ends_of(b->base, block, &first_ns, &last_ns, &has_last)) {
        add_unplaced(b, block);
        return;
    }
    first_ns += b->offset_ns;
    last_ns += b->offset_ns;
    int64_t start_ns = meet(b, first_ns, block->file);
    bool back = steps_back(block);
    b->end_ns = has_last ? last_ns + b->trail_ns : start_ns;
    add_void(b, HW_VOID_DAMAGED, b->base->n_columns, block->n_columns, start_ns, b->end_ns,
             keep_reason(b, g_strdup(block->damage)));
    b->base->n_columns += block->n_columns;
    b->known = b->void_open = true;
    b->centre_known = has_last;
    b->centre_ns = last_ns;
    b->endless = !has_last;
    b->former = block->file;
    if (back) {
        b->n_steps++;
        new_clock(b);
    }
}

static void
add_readable(Builder *b, const HwTimedBlock *block)
{
    if (block->stamps == HW_STAMPS_TIMES) {
        add_times(b, block);
        return;
    }
    int64_t first_ns, last_ns;
    bool has_last;
    ends_of(b->base, block, &first_ns, &last_ns, &has_last);
    HwSegment segment = { .first_col = b->base->n_columns,
                          .n_cols = block->n_columns,
                          .first_ns = first_ns + b->offset_ns,
                          .span_ns = last_ns - first_ns,
                          .stamps = block->stamps };
    add_stretch(b, &segment, last_ns + b->offset_ns, block->file);
}

static bool
refuse(GError **error, guint index, const char *file, const char *what)
{
    g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST, "%s: blocks[%u] (%s) %s.", "recording.json",
                index, file, what);
    return false;
}

static bool
check_block(Builder *b, const HwTimedBlock *block, guint index, GError **error)
{
    int64_t first_ns, last_ns;
    bool has_last;
    if (block->n_columns < 0 || block->n_columns > HW_MAX_COLUMNS - b->base->n_columns ||
        (block->n_columns == 0 && block->damage == NULL))
        return refuse(error, index, block->file, "has no columns or too many; check the file");
    int64_t length_ns;
    if (!hw_muldiv_half_even(block->n_columns, HW_PERIOD_NUMERATOR, b->base->rate_nhz, &length_ns) ||
        length_ns > HW_MAX_STAMP_NS)
        return refuse(error, index, block->file, "would last for years; check its columns and the rate");
    if (!ends_of(b->base, block, &first_ns, &last_ns, &has_last))
        return block->damage != NULL || refuse(error, index, block->file, "has no stamps; give its “times”");
    if (first_ns < -HW_MAX_STAMP_NS || last_ns > HW_MAX_STAMP_NS || first_ns > HW_MAX_STAMP_NS)
        return refuse(error, index, block->file, "has stamps beyond all limits; correct them");
    if (block->stamps == HW_STAMPS_EVEN &&
        (block->n_columns == 1 ? last_ns != first_ns : last_ns - first_ns < block->n_columns - 1))
        return refuse(error, index, block->file,
                      "cannot hold its columns from “first_ns” to “last_ns”; correct them");
    if (b->any_stamp && first_ns <= b->stamp_ns)
        return refuse(
            error, index, block->file,
            "starts before the former block's end; put the blocks in order of time, without overlap");
    b->stamp_ns = last_ns;
    b->any_stamp = true;
    return true;
}

static void
report_block(Builder *b, const HwTimedBlock *block)
{
    if (b->n_close > 0)
        hw_time_base_add_problem(
            b->base, g_strdup_printf("%s: %u times a scan follows the former one by less than half a "
                                     "period; check the camera's stamps.",
                                     block->file, b->n_close));
    if (b->n_steps > 0)
        hw_time_base_add_problem(
            b->base, g_strdup_printf("%s: its stamps do not advance in %u places; no gap is computed "
                                     "across them.",
                                     block->file, b->n_steps));
    b->n_close = b->n_steps = 0;
}

/* One sentence a void; those of one reason in a row (inside one block) share theirs. */
static void
report_voids(HwTimeBase *base)
{
    for (guint i = 0; i < base->voids->len;) {
        const HwVoid *first = &g_array_index(base->voids, HwVoid, i);
        int64_t sum_ns = 0;
        guint n = 0;
        while (i < base->voids->len && g_array_index(base->voids, HwVoid, i).reason == first->reason) {
            sum_ns += g_array_index(base->voids, HwVoid, i++).duration_ns;
            n++;
        }
        g_autofree char *ms = hw_number_dup_fixed((double)sum_ns / 1e6, 3);
        if (n == 1)
            hw_time_base_add_problem(
                base, g_strdup_printf("No picture for %s ms after column %" G_GINT64_FORMAT ": %s.", ms,
                                      first->after_column, first->reason));
        else
            hw_time_base_add_problem(base,
                                     g_strdup_printf("No picture in %u places, %s ms in all, after column "
                                                     "%" G_GINT64_FORMAT " and on: %s.",
                                                     n, ms, first->after_column, first->reason));
    }
}

static void
finish(Builder *b)
{
    HwTimeBase *base = b->base;
    end_run(b);
    if (b->void_open && b->endless) {
        hw_time_base_add_problem(base,
                                 g_strdup_printf("%s; the strip ends before it.", last_void(b)->reason));
        g_array_set_size(base->voids, base->voids->len - 1);
    } else {
        end_void(b, b->end_ns);
    }
    for (guint i = 0; i < b->leading->len; i++)
        hw_time_base_add_problem(base, g_strdup_printf("%s; nothing tells when it was.",
                                                       g_array_index(b->leading, Unplaced, i).reason));
    g_array_append_val(base->run_segments, base->segments->len);
    g_array_append_val(base->clocks, base->runs->len);
}

static HwTimeBase *
blank(int64_t rate_nhz)
{
    HwTimeBase *base = g_new0(HwTimeBase, 1);
    base->references = 1;
    base->rate_nhz = rate_nhz;
    base->segments = g_array_new(FALSE, FALSE, sizeof(HwSegment));
    base->times_ns = g_array_new(FALSE, FALSE, sizeof(int64_t));
    base->runs = g_array_new(FALSE, FALSE, sizeof(HwRun));
    base->run_segments = g_array_new(FALSE, FALSE, sizeof(guint));
    base->clocks = g_array_new(FALSE, FALSE, sizeof(guint));
    base->voids = g_array_new(FALSE, FALSE, sizeof(HwVoid));
    base->drops = g_array_new(FALSE, FALSE, sizeof(HwDrop));
    base->problems = g_ptr_array_new_with_free_func(g_free);
    base->reasons = g_string_chunk_new(256);
    return base;
}

static Builder
builder_for(HwTimeBase *base, const HwScan *scan)
{
    int64_t half_exposure_ns = hw_muldiv_known(scan->exposure_fs, 1, 2000000);
    int64_t period_ns = hw_muldiv_known(HW_PERIOD_NUMERATOR, 1, base->rate_nhz);
    return (Builder){
        .base = base,
        .offset_ns = scan->stamp == HW_STAMP_START ? half_exposure_ns
                     : scan->stamp == HW_STAMP_END ? -half_exposure_ns
                                                   : 0,
        .period_ns = period_ns,
        .lead_ns = period_ns / 2,
        .trail_ns = period_ns - period_ns / 2,
        /* A whole number of ns is above 1.5 periods if it is above its floor, below 0.5 if below its ceiling.
         */
        .void_over_ns = 3 * (HW_PERIOD_NUMERATOR / 2) / base->rate_nhz,
        .close_under_ns = (HW_PERIOD_NUMERATOR / 2 + base->rate_nhz - 1) / base->rate_nhz,
        .former = "",
    };
}

HwTimeBase *
hw_time_base_new(const HwScan *scan, const HwTimedBlock *blocks, guint n_blocks, GError **error)
{
    g_return_val_if_fail(scan->rate_nhz > 0, NULL);
    g_autoptr(HwTimeBase) base = blank(scan->rate_nhz);
    g_autoptr(GArray) leading = g_array_new(FALSE, FALSE, sizeof(Unplaced));
    g_autofree int64_t *first_cols = g_new(int64_t, n_blocks + 1);
    Builder b = builder_for(base, scan);
    b.leading = leading;
    for (guint i = 0; i < n_blocks; i++) {
        if (!check_block(&b, &blocks[i], i, error))
            return NULL;
        first_cols[i] = base->n_columns;
        if (blocks[i].damage != NULL)
            add_damaged(&b, &blocks[i]);
        else
            add_readable(&b, &blocks[i]);
        report_block(&b, &blocks[i]);
    }
    finish(&b);
    report_voids(base);
    hw_time_base_judge_rates(base, blocks, first_cols, n_blocks);
    return g_steal_pointer(&base);
}
