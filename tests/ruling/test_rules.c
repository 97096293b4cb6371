/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rule sets: the shipped ones, and what is refused in one's own. */
#include "core/base/limits.h"
#include "core/ruling/rules.h"
#include "core/ruling/ruling_error.h"

#include <glib.h>
#include <string.h>

static void
every_shipped_rule_set_opens_and_names_its_source(void)
{
    guint n = 0;
    for (const char *const *id = hw_rules_get_ids(); *id != NULL; id++, n++) {
        g_autoptr(GError) error = NULL;
        g_autoptr(HwRules) rules = hw_rules_read(*id, &error);
        g_assert_no_error(error);
        g_assert_cmpstr(rules->id, ==, *id);
        g_assert_nonnull(strstr(rules->article, "UCI"));
        g_assert_nonnull(strstr(rules->edition, "Part"));
        g_autofree char *text = hw_rules_dup_text(rules);
        g_assert_nonnull(strstr(text, rules->article));
        g_assert_nonnull(strstr(text, "prevail"));
    }
    g_assert_cmpuint(n, ==, 14);
}

static void
shipped_figures_are_those_of_the_regulations(void)
{
    static const struct {
        const char *id;
        int64_t precision_ns, group_ns, breakaway_ns;
        HwRankBy rank_by;
        double limit_percent;
    } table[] = {
        { "road-1s", HW_NS_PER_S, HW_NS_PER_S, 0, HW_RANK_BY_CROSSING,
          8 }, /* UCI 2.3.041, 1.2.107, 2.3.039 */
        { "road-3s", HW_NS_PER_S, 3 * HW_NS_PER_S, HW_NS_PER_S, HW_RANK_BY_CROSSING,
          8 },                                                                    /* sprint-zone protocol */
        { "itt-10th", HW_NS_PER_S / 10, 0, 0, HW_RANK_BY_OFFICIAL_TIME, 0 },      /* UCI 2.4.015 */
        { "itt-100th", HW_NS_PER_S / 100, 0, 0, HW_RANK_BY_OFFICIAL_TIME, 0 },    /* UCI 2.4.016 */
        { "ttt-100th", HW_NS_PER_S / 100, 0, 0, HW_RANK_BY_OFFICIAL_TIME, 0 },    /* UCI 2.5.013 */
        { "track-timed", HW_NS_PER_S / 1000, 0, 0, HW_RANK_BY_OFFICIAL_TIME, 0 }, /* UCI 3.2.015 */
        { "downhill", HW_NS_PER_S / 1000, 0, 0, HW_RANK_BY_OFFICIAL_TIME, 0 },    /* UCI 1.2.106 */
        { "bmx", HW_NS_PER_S / 1000, 0, 0, HW_RANK_BY_CROSSING, 0 },              /* UCI 1.2.106 */
        { "cyclo-cross", HW_NS_PER_S, 0, 0, HW_RANK_BY_CROSSING, 0 },             /* UCI 5.1.050, 1.2.106 */
    };
    for (guint i = 0; i < G_N_ELEMENTS(table); i++) {
        g_autoptr(HwRules) rules = hw_rules_read(table[i].id, NULL);
        g_assert_cmpint(rules->precision_ns, ==, table[i].precision_ns);
        g_assert_cmpint(rules->rounding, ==, HW_ROUND_DOWN);
        g_assert_cmpint(rules->group_gap_ns, ==, table[i].group_ns);
        g_assert_cmpint(rules->breakaway_gap_ns, ==, table[i].breakaway_ns);
        g_assert_cmpint(rules->rank_by, ==, table[i].rank_by);
        g_assert_cmpfloat(rules->time_limit_percent, ==, table[i].limit_percent);
    }
}

static void
elimination_goes_by_the_rear_wheel_but_for_its_final_sprint(void)
{
    g_autoptr(HwRules) rules = hw_rules_read("track-elimination", NULL); /* from memory */
    g_assert_cmpint(rules->order_edge[HW_PASSAGE_ELIMINATION], ==, HW_EDGE_REAR);
    g_assert_cmpint(rules->order_edge[HW_PASSAGE_FINAL_SPRINT], ==, HW_EDGE_FRONT);
    g_assert_true(rules->places_only);
}

#define HEAD "{\"halfwheel_rules\":1,\"id\":\"own\",\"title\":\"T\",\"article\":\"A\",\"edition\":\"E\","
#define BODY                                                                                                 \
    "\"precision_ns\":1000000000,\"rounding\":\"down\",\"order_edge\":\"front\",\"rank_by\":\"crossing\","   \
    "\"tie\":\"ask\""

static void
what_cannot_be_followed_is_refused_by_name(void)
{
    static const struct {
        const char *text, *named;
    } cases[] = {
        { "{}", "halfwheel_rules" },
        { "[]", "halfwheel_rules" },
        { "{\"halfwheel_rules\":2}", "halfwheel_rules" },
        { HEAD "\"precision_ns\":1,\"rounding\":\"sideways\",\"order_edge\":\"front\",\"rank_by\":"
               "\"crossing\",\"tie\":\"ask\"}",
          "sideways" },
        { HEAD BODY ",\"roundng\":\"up\"}", "roundng" },
        { HEAD BODY ",\"group\":{\"gap_ns\":1000000000,\"gap\":2}}", "gap" },
        { HEAD BODY ",\"group\":{\"gap_ns\":1000000000,\"compare\":\">\"}}", "compare" },
        { HEAD BODY ",\"group\":{}}", "gap_ns" },
        { HEAD "\"rounding\":\"down\",\"order_edge\":\"front\",\"rank_by\":\"crossing\",\"tie\":\"ask\"}",
          "precision_ns" },
        { HEAD "\"precision_ns\":0,\"rounding\":\"down\",\"order_edge\":\"front\",\"rank_by\":\"crossing\","
               "\"tie\":\"ask\"}",
          "precision_ns" },
        { HEAD "\"precision_ns\":1,\"rounding\":\"down\",\"order_edge\":\"middle\",\"rank_by\":\"crossing\","
               "\"tie\":\"ask\"}",
          "middle" },
        { HEAD "\"precision_ns\":1,\"rounding\":\"down\",\"order_edge\":\"front\",\"rank_by\":\"bib\","
               "\"tie\":\"ask\"}",
          "bib" },
        { HEAD "\"places_only\":true,\"order_edge\":\"front\",\"rank_by\":\"official_time\",\"tie\":\"ask\"}",
          "places_only" },
        { HEAD BODY ",\"p_order_limit\":0.7}", "p_order_limit" },
        { "{\"halfwheel_rules\":1,\"id\":\"\",\"title\":\"T\",\"article\":\"A\",\"edition\":\"E\"," BODY "}",
          "id" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(GError) error = NULL;
        g_assert_null(hw_rules_parse(cases[i].text, strlen(cases[i].text), "own.json", &error));
        g_assert_nonnull(error);
        g_assert_nonnull(strstr(error->message, "own.json"));
        g_assert_nonnull(strstr(error->message, cases[i].named));
    }
}

static void
an_unknown_id_names_the_known_ones(void)
{
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_rules_read("road-2s", &error));
    g_assert_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RULES);
    g_assert_nonnull(strstr(error->message, "road-2s"));
    g_assert_nonnull(strstr(error->message, "road-1s"));
}

static void
ones_own_goes_through_the_same_parser(void)
{
    static const char text[] = HEAD BODY ",\"group\":{\"gap_ns\":2000000000},\"p_order_limit\":0.001}";
    g_autoptr(HwRules) rules = hw_rules_parse(text, strlen(text), "own.json", NULL);
    g_assert_cmpint(rules->group_gap_ns, ==, 2 * HW_NS_PER_S);
    g_assert_cmpfloat(rules->p_order_limit, ==, 0.001);
    g_assert_cmpstr(rules->json, ==, text);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/rules/every_shipped_rule_set_opens_and_names_its_source",
                    every_shipped_rule_set_opens_and_names_its_source);
    g_test_add_func("/rules/shipped_figures_are_those_of_the_regulations",
                    shipped_figures_are_those_of_the_regulations);
    g_test_add_func("/rules/elimination_goes_by_the_rear_wheel_but_for_its_final_sprint",
                    elimination_goes_by_the_rear_wheel_but_for_its_final_sprint);
    g_test_add_func("/rules/what_cannot_be_followed_is_refused_by_name",
                    what_cannot_be_followed_is_refused_by_name);
    g_test_add_func("/rules/an_unknown_id_names_the_known_ones", an_unknown_id_names_the_known_ones);
    g_test_add_func("/rules/ones_own_goes_through_the_same_parser", ones_own_goes_through_the_same_parser);
    return g_test_run();
}
