/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/column_map.h"

#include "core/ruling/ruling_error.h"

#include <string.h>

static const char *const field_names[HW_N_FIELDS] = { "bib",        "name",     "first_name", "team",
                                                      "nation",     "category", "start",      "start_actual",
                                                      "diameter_m", "status",   "uci_id" };

/* Headers as people write them, folded: lower case, accents off, only letters and digits. Common practice. */
static const struct {
    HwField field;
    const char *words;
} headers[] = {
    { HW_FIELD_BIB, "bib bibno bibnumber no nr num number ridernumber racenumber startnumber "
                    "dossard dos numero ndossard numerodossard "
                    "startnummer startnr stnr rueckennummer ruckennummer "
                    "dorsal pettorale numerodigara numpettorale" },
    { HW_FIELD_NAME, "name rider ridername fullname lastname surname familyname athlete "
                     "nom coureur nomprenom nometprenom "
                     "fahrer nachname familienname namevorname fahrername "
                     "apellido apellidos apellidosynombre corredor nombreyapellidos "
                     "cognome atleta corridore cognomenome cognomeenome nominativo" },
    { HW_FIELD_FIRST_NAME, "firstname givenname forename prenom vorname nombre nome" },
    { HW_FIELD_TEAM,
      "team teamname club equipe equipeclub nomequipe mannschaft verein equipo squadra societa "
      "teamclub gruppo" },
    { HW_FIELD_NATION,
      "nation nat nationality country noc nationalite pays nationalitat nationalitaet land pais "
      "nacionalidad nazione nazionalita paese" },
    { HW_FIELD_CATEGORY, "category cat class categorie catage kategorie klasse kat categoria classe" },
    { HW_FIELD_START,
      "start starttime scheduledstart heuredepart depart heurededepart startzeit soll salida horasalida "
      "horadesalida partenza orapartenza oradipartenza" },
    { HW_FIELD_START_ACTUAL,
      "startactual actualstart gatestart departreel heuredepartreelle istzeitstart iststart "
      "salidareal partenzaeffettiva partenzareale" },
    { HW_FIELD_DIAMETER_M, "diameterm wheeldiameterm diametrem durchmesserm diametrom" },
    { HW_FIELD_STATUS, "status statut etat estado stato" },
    { HW_FIELD_UCI_ID, "uciid ucicode codeuci iduci" },
};

const char *
hw_field_get_name(HwField field)
{
    return field_names[field];
}

/* "N° Dossard" → "ndossard", "Prénom" → "prenom", "start_actual" → "startactual". */
static char *
fold_header(const char *header)
{
    g_autofree char *split = g_utf8_normalize(header, -1, G_NORMALIZE_NFD);
    g_autofree char *lower = g_utf8_strdown(split != NULL ? split : header, -1);
    GString *folded = g_string_new(NULL);
    for (const char *p = lower; *p != '\0'; p = g_utf8_next_char(p)) {
        gunichar c = g_utf8_get_char(p);
        if (c == 0xDF)
            g_string_append(folded, "ss");
        else if (c < 128 && g_ascii_isalnum((char)c))
            g_string_append_c(folded, (char)c);
    }
    return g_string_free(folded, FALSE);
}

static bool
recognise(const char *header, HwField *field)
{
    g_autofree char *folded = fold_header(header);
    for (guint i = 0; i < G_N_ELEMENTS(headers); i++) {
        g_auto(GStrv) words = g_strsplit(headers[i].words, " ", -1);
        if (*folded != '\0' && g_strv_contains((const char *const *)words, folded)) {
            *field = headers[i].field;
            return true;
        }
    }
    return false;
}

/* "bib=Dossard,name=Coureur": one assignment taken. */
static bool
take_assignment(const HwCsvTable *table, const char *assignment, HwColumnMap *map, GError **error)
{
    const char *equals = strchr(assignment, '=');
    g_autofree char *field = g_strndup(assignment, equals != NULL ? (gsize)(equals - assignment) : 0);
    for (int i = 0; equals != NULL && i < HW_N_FIELDS; i++) {
        if (strcmp(field_names[i], field) != 0)
            continue;
        map->column[i] = hw_csv_table_find(table, equals + 1);
        if (map->column[i] != G_MAXUINT)
            return true;
        g_autofree char *known = g_strjoinv(", ", table->header);
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_START_LIST,
                    "%s has no column “%s”; its columns are %s.", table->label, equals + 1, known);
        return false;
    }
    g_set_error(
        error, HW_RULING_ERROR, HW_RULING_ERROR_START_LIST,
        "“%s” does not map a column; write it as bib=Dossard (bib, name, first_name, team, nation, category, "
        "start, start_actual, diameter_m, status, uci_id).",
        assignment);
    return false;
}

bool
hw_column_map_make(const HwCsvTable *table, const char *by_hand, HwColumnMap *map, GError **error)
{
    HwColumnMap made;
    for (int i = 0; i < HW_N_FIELDS; i++)
        made.column[i] = G_MAXUINT;
    g_auto(GStrv) assignments = g_strsplit(by_hand != NULL ? by_hand : "", ",", -1);
    for (GStrv one = assignments; *one != NULL; one++) {
        if (!take_assignment(table, *one, &made, error))
            return false;
    }
    HwColumnMap mapped = made;
    for (guint column = 0; table->header[column] != NULL; column++) {
        HwField field;
        if (!recognise(table->header[column], &field) || mapped.column[field] != G_MAXUINT)
            continue;
        if (made.column[field] != G_MAXUINT) {
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_START_LIST,
                        "%s: both “%s” and “%s” may be the %s; say which with %s=HEADER.", table->label,
                        table->header[made.column[field]], table->header[column], field_names[field],
                        field_names[field]);
            return false;
        }
        made.column[field] = column;
    }
    *map = made;
    return true;
}

/* "; not used: Colour, Seed", where there are such columns. */
static void
append_unused(GString *text, const HwColumnMap *map, const HwCsvTable *table)
{
    const char *before = "; not used: ";
    for (guint column = 0; table->header[column] != NULL; column++) {
        bool used = *table->header[column] == '\0';
        for (int i = 0; i < HW_N_FIELDS; i++)
            used |= map->column[i] == column;
        if (!used) {
            g_string_append_printf(text, "%s%s", before, table->header[column]);
            before = ", ";
        }
    }
}

char *
hw_column_map_dup_text(const HwColumnMap *map, const HwCsvTable *table)
{
    GString *text = g_string_new(NULL);
    for (int i = 0; i < HW_N_FIELDS; i++) {
        if (map->column[i] != G_MAXUINT)
            g_string_append_printf(text, "%s%s ← %s", text->len > 0 ? ", " : "", field_names[i],
                                   table->header[map->column[i]]);
    }
    append_unused(text, map, table);
    return g_string_free(text, FALSE);
}
