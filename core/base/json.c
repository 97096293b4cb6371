/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/json.h"

#include "core/base/base_error.h"
#include "core/base/limits.h"
#include "core/base/number.h"

#include <math.h>
#include <string.h>

/* Levels of brackets, strings passed over. Counted before parsing, so that nothing deep is ever built. */
static bool
depth_within(const char *text, size_t size, int limit)
{
    int depth = 0;
    bool in_string = false;
    for (size_t i = 0; i < size; i++) {
        char c = text[i];
        if (in_string) {
            if (c == '\\')
                i++;
            else if (c == '"')
                in_string = false;
        } else if (c == '"') {
            in_string = true;
        } else if (c == '[' || c == '{') {
            if (++depth > limit)
                return false;
        } else if (c == ']' || c == '}') {
            depth--;
        }
    }
    return true;
}

json_t *
hw_json_parse(const char *text, size_t size, const char *label, GError **error)
{
    if (memchr(text, '\0', size) != NULL) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX,
                    "%s holds a NUL byte and is no JSON text; write it again.", label);
        return NULL;
    }
    if (!depth_within(text, size, HW_MAX_JSON_DEPTH)) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE,
                    "%s is nested more than %d levels deep; flatten it.", label, HW_MAX_JSON_DEPTH);
        return NULL;
    }
    json_error_t fault;
    json_t *root = json_loadb(text, size, JSON_REJECT_DUPLICATES, &fault);
    if (root == NULL) {
        /* jansson cuts its quotation between any two bytes. */
        g_autofree char *reason = g_utf8_make_valid(fault.text, -1);
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX,
                    "%s is not valid JSON at line %d, column %d (%s); mend it there.", label, fault.line,
                    fault.column, reason);
    }
    return root;
}

#define KIND(type) (1u << (type))

/* The value of a key, with null taken for absent (*value NULL), of one of the kinds. False with an error
 * where it is needed and not there, or of another kind; `wanted` says which would do. */
static bool
find(const json_t *object, const char *key, HwJsonNeed need, const char *where, unsigned kinds,
     const char *wanted, json_t **value, GError **error)
{
    json_t *found = json_object_get(object, key);
    *value = found != NULL && !json_is_null(found) ? found : NULL;
    if (*value == NULL && need == HW_JSON_REQUIRED) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX, "%s: “%s” is missing; add it.", where, key);
        return false;
    }
    if (*value != NULL && (KIND(json_typeof(*value)) & kinds) == 0) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX, "%s: “%s” must be %s.", where, key, wanted);
        return false;
    }
    return true;
}

bool
hw_json_get_string(const json_t *object, const char *key, HwJsonNeed need, const char *where,
                   const char **value, GError **error)
{
    json_t *found;
    if (!find(object, key, need, where, KIND(JSON_STRING), "a text", &found, error))
        return false;
    if (found != NULL)
        *value = json_string_value(found);
    return true;
}

bool
hw_json_get_int64(const json_t *object, const char *key, HwJsonNeed need, int64_t min, int64_t max,
                  const char *where, int64_t *value, GError **error)
{
    json_t *found;
    if (!find(object, key, need, where, KIND(JSON_INTEGER), "a whole number", &found, error))
        return false;
    if (found == NULL)
        return true;
    int64_t number = json_integer_value(found);
    if (number < min || number > max) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE,
                    "%s: “%s” is %" G_GINT64_FORMAT "; it must lie from %" G_GINT64_FORMAT
                    " to %" G_GINT64_FORMAT ".",
                    where, key, number, min, max);
        return false;
    }
    *value = number;
    return true;
}

bool
hw_json_get_double(const json_t *object, const char *key, HwJsonNeed need, double min, double max,
                   const char *where, double *value, GError **error)
{
    json_t *found;
    if (!find(object, key, need, where, KIND(JSON_INTEGER) | KIND(JSON_REAL), "a number", &found, error))
        return false;
    if (found == NULL)
        return true;
    double number = json_number_value(found);
    if (!isfinite(number) || number < min || number > max) {
        g_autofree char *given = hw_number_dup_double(number);
        g_autofree char *least = hw_number_dup_double(min);
        g_autofree char *most = hw_number_dup_double(max);
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE, "%s: “%s” is %s; it must lie from %s to %s.",
                    where, key, given, least, most);
        return false;
    }
    *value = number;
    return true;
}

bool
hw_json_get_bool(const json_t *object, const char *key, const char *where, bool *value, GError **error)
{
    json_t *found;
    if (!find(object, key, HW_JSON_OPTIONAL, where, KIND(JSON_TRUE) | KIND(JSON_FALSE), "true or false",
              &found, error))
        return false;
    if (found != NULL)
        *value = json_is_true(found);
    return true;
}

bool
hw_json_get_array(const json_t *object, const char *key, HwJsonNeed need, const char *where, json_t **value,
                  GError **error)
{
    json_t *found;
    if (!find(object, key, need, where, KIND(JSON_ARRAY), "a list", &found, error))
        return false;
    if (found != NULL)
        *value = found;
    return true;
}

bool
hw_json_get_object(const json_t *object, const char *key, HwJsonNeed need, const char *where, json_t **value,
                   GError **error)
{
    json_t *found;
    if (!find(object, key, need, where, KIND(JSON_OBJECT), "an object", &found, error))
        return false;
    if (found != NULL)
        *value = found;
    return true;
}

bool
hw_json_get_word(const json_t *object, const char *key, HwJsonNeed need, const char *const *words,
                 const char *where, int *index, GError **error)
{
    const char *word = NULL;
    if (!hw_json_get_string(object, key, need, where, &word, error))
        return false;
    if (word == NULL)
        return true;
    for (int i = 0; words[i] != NULL; i++) {
        if (strcmp(words[i], word) == 0) {
            *index = i;
            return true;
        }
    }
    g_autofree char *known = g_strjoinv(", ", (char **)words);
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX, "%s: “%s” is “%s”; it must be one of %s.", where,
                key, word, known);
    return false;
}

char *
hw_json_dup_text(const json_t *value)
{
    char *dumped = json_dumps(value, JSON_INDENT(2) | JSON_REAL_PRECISION(15) | JSON_ENCODE_ANY);
    char *text = g_strconcat(dumped, "\n", NULL);
    free(dumped);
    return text;
}
