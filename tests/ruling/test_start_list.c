/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Start lists as organisers write them. */
#include "core/ruling/ruling_error.h"
#include "core/ruling/start_list.h"

#include <glib.h>
#include <string.h>

static HwStartList *
parse(const char *text, const char *map, GError **error)
{
    return hw_start_list_parse(text, strlen(text), "list.csv", map, error);
}

static const HwRider *
rider(const HwStartList *list, guint index)
{
    return g_ptr_array_index(list->riders, index);
}

static void
headers_of_five_languages_are_recognised(void)
{
    static const char *const tables[] = {
        "Bib,Name,Team,Nationality,Category,UCI ID\n12,Ada Lind,North,SWE,Elite,10001\n",
        "N° dossard;Nom;Équipe;Nationalité;Catégorie;Code UCI\n12;Ada Lind;North;SWE;Elite;10001\n",
        "Startnummer;Fahrername;Mannschaft;Nationalität;Kategorie;UCI-ID\n12;Ada "
        "Lind;North;SWE;Elite;10001\n",
        "Dorsal;Nombre y apellidos;Equipo;Nacionalidad;Categoría;UCI ID\n12;Ada Lind;North;SWE;Elite;10001\n",
        "Pettorale\tCognome e nome\tSquadra\tNazionalità\tCategoria\tUCI ID\n12\tAda "
        "Lind\tNorth\tSWE\tElite\t10001\n",
    };
    for (guint i = 0; i < G_N_ELEMENTS(tables); i++) {
        g_autoptr(GError) error = NULL;
        g_autoptr(HwStartList) list = parse(tables[i], NULL, &error);
        g_assert_no_error(error);
        g_assert_cmpuint(list->riders->len, ==, 1);
        g_assert_cmpstr(rider(list, 0)->bib, ==, "12");
        g_assert_cmpstr(rider(list, 0)->name, ==, "Ada Lind");
        g_assert_cmpstr(rider(list, 0)->team, ==, "North");
        g_assert_cmpstr(rider(list, 0)->nation, ==, "SWE");
        g_assert_cmpstr(rider(list, 0)->category, ==, "Elite");
        g_assert_cmpstr(rider(list, 0)->uci_id, ==, "10001");
    }
}

static void
what_was_understood_is_said(void)
{
    g_autoptr(HwStartList) list = parse("Dossard;Nom;Couleur\n1;A;bleu\n", NULL, NULL);
    g_assert_nonnull(strstr(list->understood, "semicolon-separated, UTF-8"));
    g_assert_nonnull(strstr(list->understood, "bib ← Dossard"));
    g_assert_nonnull(strstr(list->understood, "name ← Nom; not used: Couleur"));
}

static void
encodings_are_guessed(void)
{
    static const char utf16_le[] = "\xFF\xFE"
                                   "b\0i\0b\0,\0n\0a\0m\0e\0\n\0"
                                   "7\0,\0\xC9\0l\0o\0\n\0";
    static const char windows[] = "bib;name\n7;\xC9lo\n";
    static const char utf8_bom[] = "\xEF\xBB\xBF"
                                   "bib,name\n7,\xC3\x89lo\n";
    static const struct {
        const char *text;
        gsize size;
        const char *said;
    } cases[] = { { utf16_le, sizeof utf16_le - 1, "UTF-16LE" },
                  { windows, sizeof windows - 1, "windows-1252" },
                  { utf8_bom, sizeof utf8_bom - 1, "UTF-8 with a byte order mark" } };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(GError) error = NULL;
        g_autoptr(HwStartList) list =
            hw_start_list_parse(cases[i].text, cases[i].size, "list.csv", NULL, &error);
        g_assert_no_error(error);
        g_assert_cmpstr(rider(list, 0)->name, ==, "Élo");
        g_assert_nonnull(strstr(list->understood, cases[i].said));
    }
}

static void
first_and_last_names_are_joined(void)
{
    g_autoptr(HwStartList) list = parse("dossard,nom,prénom\n1,Orban,Zita\n2,Solo,\n", NULL, NULL);
    g_assert_cmpstr(rider(list, 0)->name, ==, "Zita Orban");
    g_assert_cmpstr(rider(list, 1)->name, ==, "Solo");
    g_autoptr(HwStartList) spanish = parse("Dorsal;Nombre;Apellidos\n1;Zita;Orban\n", NULL, NULL);
    g_assert_cmpstr(rider(spanish, 0)->name, ==, "Zita Orban");
    g_autoptr(HwStartList) italian = parse("Pettorale;Cognome;Nome\n1;Orban;Zita\n", NULL, NULL);
    g_assert_cmpstr(rider(italian, 0)->name, ==, "Zita Orban");
}

static void
a_map_by_hand_wins(void)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwStartList) list = parse("plate,bib,who\n5,99,Kim\n", "bib=plate,name=who", &error);
    g_assert_no_error(error);
    g_assert_cmpstr(rider(list, 0)->bib, ==, "5");
    g_assert_cmpstr(rider(list, 0)->name, ==, "Kim");
}

static void
one_bib_may_stand_in_two_categories(void)
{
    bool ambiguous;
    g_autoptr(HwStartList) list = parse("bib,category\n1,A\n1,B\n2,A\n", NULL, NULL);
    g_assert_null(hw_start_list_find(list, "1", "", &ambiguous));
    g_assert_true(ambiguous);
    g_assert_true(hw_start_list_find(list, "1", "B", &ambiguous) == rider(list, 1));
    g_assert_true(hw_start_list_find(list, "2", NULL, &ambiguous) == rider(list, 2));
    g_assert_false(ambiguous);
}

static void
starts_statuses_and_diameters_are_read(void)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwStartList) list = parse("bib;start;start_actual;status;diameter_m\n"
                                        "1;14:05:30;14:05:30.25;;0,668\n"
                                        "2;2027-06-13T14:06:30+02:00;;LAP 2;\n"
                                        "3;;;np;\n",
                                        NULL, &error);
    g_assert_no_error(error);
    g_assert_cmpint(rider(list, 0)->start.time_of_day_ns, ==, INT64_C(50730000000000));
    g_assert_cmpint(rider(list, 0)->start_actual.time_of_day_ns, ==, INT64_C(50730250000000));
    g_assert_cmpfloat(rider(list, 0)->diameter_m, ==, 0.668);
    g_assert_true(rider(list, 1)->start.is_instant);
    g_assert_cmpint(rider(list, 1)->status, ==, HW_STATUS_LAP);
    g_assert_cmpint(rider(list, 1)->laps_behind, ==, 2);
    g_assert_cmpint(rider(list, 2)->status, ==, HW_STATUS_DNS); /* NP: French, from memory */
}

static void
faults_are_named_with_their_line(void)
{
    static const struct {
        const char *text, *map, *named[3];
    } cases[] = {
        { "bib,name\n1,A\n1,B\n", NULL, { "line 3", "bib 1", "line 2" } },
        { "bib,category\n1,A\n1,A\n", NULL, { "line 3", "bib 1", "category" } },
        { "name\nA\n", NULL, { "list.csv", "bibs", "name" } },
        { "bib,name\n,A\n", NULL, { "line 2", "bib", NULL } },
        { "bib\n?1\n", NULL, { "line 2", "?1", NULL } },
        { "bib,status\n1,gone\n", NULL, { "line 2", "gone", "DNF" } },
        { "bib,start\n1,25:00\n", NULL, { "line 2", "25:00", "14:05:30" } },
        { "bib,diameter_m\n1,668\n", NULL, { "line 2", "668", "metres" } },
        { "bib,nom,name\n1,A,B\n", NULL, { "nom", "name", "say which" } },
        { "bib\n1\n", "bib=plate", { "plate", "bib", NULL } },
        { "bib\n1\n", "colour=bib", { "colour", "bib=", NULL } },
        { "bib,name\n1,A,B\n", NULL, { "line 2", "3 fields", NULL } },
        { "bib,name\n1,\"A\n", NULL, { "line 2", "quotation", NULL } },
        { "", NULL, { "list.csv", "empty", NULL } },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(GError) error = NULL;
        g_assert_null(parse(cases[i].text, cases[i].map, &error));
        g_assert_nonnull(error);
        for (guint k = 0; k < 3 && cases[i].named[k] != NULL; k++)
            g_assert_nonnull(strstr(error->message, cases[i].named[k]));
    }
}

static void
bibs_order_by_number(void)
{
    g_assert_cmpint(hw_bib_compare("2", "12"), <, 0);
    g_assert_cmpint(hw_bib_compare("12", "12A"), <, 0);
    g_assert_cmpint(hw_bib_compare("A1", "9"), >, 0);
    g_assert_cmpint(hw_bib_compare("7", "7"), ==, 0);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/start_list/headers_of_five_languages_are_recognised",
                    headers_of_five_languages_are_recognised);
    g_test_add_func("/start_list/what_was_understood_is_said", what_was_understood_is_said);
    g_test_add_func("/start_list/encodings_are_guessed", encodings_are_guessed);
    g_test_add_func("/start_list/first_and_last_names_are_joined", first_and_last_names_are_joined);
    g_test_add_func("/start_list/a_map_by_hand_wins", a_map_by_hand_wins);
    g_test_add_func("/start_list/one_bib_may_stand_in_two_categories", one_bib_may_stand_in_two_categories);
    g_test_add_func("/start_list/starts_statuses_and_diameters_are_read",
                    starts_statuses_and_diameters_are_read);
    g_test_add_func("/start_list/faults_are_named_with_their_line", faults_are_named_with_their_line);
    g_test_add_func("/start_list/bibs_order_by_number", bibs_order_by_number);
    return g_test_run();
}
