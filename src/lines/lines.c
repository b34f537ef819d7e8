/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * lines.c - rows of measurements checked and turned into speeds; names and the map of kinds to model speeds (see
 * lines.h).
 *
 * Errors: dv/dq = 4 c q/(q^2 + 1)^2 for a wavelength, dv/dy = c (1 + y^2)^(-3/2) for a half width. Can fail: bad
 * rows (all of them are looked at, as many as fit are named), memory.
 */
#include "luxgale/lines.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "luxgale/text.h"

#include <math.h>
#include <string.h>

static const double air_shortest = 2e-5; /* [cm]: below 2000 Angstrom wavelengths are listed in vacuum */

static const char *const kind_names[LXG_LINE_KINDS] = {"absorption", "blue-edge", "half-maximum",
                                                       "zero-intensity", "emission-peak"};
static const char *const model_names[LXG_LINE_MODELS] = {"photosphere", "terminal", "depth", "shell", "rest"};
static const char *const system_names[LXG_LINE_SYSTEMS] = {"wind", "shell", "other"};

const char *lxg_line_kind_name(enum lxg_line_kind kind) {
  return (unsigned)kind < LXG_LINE_KINDS ? kind_names[kind] : "unknown";
}

const char *lxg_line_model_name(enum lxg_line_model model) {
  return (unsigned)model < LXG_LINE_MODELS ? model_names[model] : "unknown";
}

const char *lxg_line_system_name(enum lxg_line_system system) {
  return (unsigned)system < LXG_LINE_SYSTEMS ? system_names[system] : "unknown";
}

static int find(const char *const names[], int count, const char *name) {
  int found = 0;
  while (found < count && strcmp(names[found], name) != 0) {
    found++;
  }
  return found;
}

enum lxg_line_kind lxg_line_kind_find(const char *name) {
  return (enum lxg_line_kind)find(kind_names, LXG_LINE_KINDS, name);
}

void lxg_line_map_default(struct lxg_line_map *map) {
  *map = (struct lxg_line_map){.kind = {
                                   [LXG_LINE_ABSORPTION] = {LXG_LINE_MODEL_PHOTOSPHERE, 0.0},
                                   [LXG_LINE_BLUE_EDGE] = {LXG_LINE_MODEL_TERMINAL, 0.0},
                                   [LXG_LINE_HALF_MAXIMUM] = {LXG_LINE_MODEL_TERMINAL, 0.0},
                                   [LXG_LINE_ZERO_INTENSITY] = {LXG_LINE_MODEL_TERMINAL, 0.0},
                                   [LXG_LINE_EMISSION_PEAK] = {LXG_LINE_MODEL_REST, 0.0},
                               }};
}

enum lxg_status lxg_line_map_set(struct lxg_line_map *map, const char *kind, const char *model,
                                 struct lxg_error *error) {
  const enum lxg_line_kind k = lxg_line_kind_find(kind);
  if (k == LXG_LINE_KINDS) {
    return lxg_error_set(error, LXG_INPUT, "line-map",
                         "kind = %s: absorption, blue-edge, half-maximum, zero-intensity, emission-peak",
                         kind);
  }
  int m = find(model_names, LXG_LINE_MODELS, model);
  double depth = 0.0;
  if (m == LXG_LINE_MODELS && strncmp(model, "depth ", 6) == 0) {
    const char *const number = model + 6;
    const bool read = lxg_text_parse_number(number, strlen(number), false, &depth) == LXG_TEXT_NUMBER;
    m = read ? LXG_LINE_MODEL_DEPTH : m;
  }
  if (m == LXG_LINE_MODELS || (m == LXG_LINE_MODEL_DEPTH && !(depth > 0.0 && isfinite(depth)))) {
    return lxg_error_set(
        error, LXG_INPUT, "line-map",
        "model of %s = %s: photosphere, terminal, shell, rest, or depth and a number above 0", kind, model);
  }
  map->kind[k].model = (enum lxg_line_model)m;
  map->kind[k].depth = depth;
  return LXG_OK;
}

static bool is_width(enum lxg_line_kind kind) {
  return kind == LXG_LINE_HALF_MAXIMUM || kind == LXG_LINE_ZERO_INTENSITY;
}

/* What is wrong with a row besides its numbers' signs; NULL if nothing. */
static const char *check_choice(const struct lxg_line_input *in, const char **code) {
  *code = "line-kind";
  if ((unsigned)in->kind >= LXG_LINE_KINDS) {
    return "kind: absorption, blue-edge, half-maximum, zero-intensity or emission-peak";
  }
  *code = "line-measure";
  if ((unsigned)in->measure > LXG_LINE_SPEED || (unsigned)in->medium > LXG_LINE_AIR) {
    return "a wavelength in air or vacuum, a half width, a velocity or a speed is due";
  }
  if (in->measure == LXG_LINE_HALF_WIDTH && !is_width(in->kind)) {
    return "a half width belongs to half-maximum or zero-intensity";
  }
  if (in->measure == LXG_LINE_SPEED && in->kind == LXG_LINE_EMISSION_PEAK) {
    return "an emission peak has a radial velocity or a wavelength, not a speed";
  }
  return NULL;
}

static const char *check_numbers(const struct lxg_line_input *in, const char **code) {
  const bool wavelength = in->measure == LXG_LINE_WAVELENGTH;
  const bool spectral = wavelength || in->measure == LXG_LINE_HALF_WIDTH;
  *code = "line-epoch";
  if (!isfinite(in->epoch)) {
    return "epoch: a finite time";
  }
  *code = "line-rest";
  if (spectral && !(in->rest > 0.0 && isfinite(in->rest))) {
    return "rest wavelength: finite and above 0";
  }
  if (spectral && in->medium == LXG_LINE_AIR && in->rest < air_shortest) {
    return "rest wavelength: in vacuum below 2000 Angstrom";
  }
  *code = "line-value";
  if (!isfinite(in->value) || (in->measure != LXG_LINE_VELOCITY && !(in->value > 0.0))) {
    return wavelength ? "observed wavelength: finite and above 0"
                      : "half width, velocity or speed: finite, the first and "
                        "last above 0";
  }
  if (wavelength && in->medium == LXG_LINE_AIR && in->value < air_shortest) {
    return "observed wavelength: in vacuum below 2000 Angstrom";
  }
  if (!spectral && !(fabs(in->value) < LXG_SPEED_OF_LIGHT)) {
    return "velocity: below the speed of light";
  }
  *code = "line-error";
  if (!(in->error > 0.0 && isfinite(in->error))) {
    return "error: finite and above 0";
  }
  return NULL;
}

/* Radial velocity (or speed of a width) and its error. */
static void convert(const struct lxg_line_input *in, double *velocity, double *sigma) {
  const bool air = in->medium == LXG_LINE_AIR;
  *velocity = in->value;
  *sigma = in->error;
  if (in->measure == LXG_LINE_SPEED) {
    *velocity = in->kind == LXG_LINE_EMISSION_PEAK ? in->value : -in->value;
  } else if (in->measure == LXG_LINE_WAVELENGTH) {
    const double rest = air ? lxg_line_vacuum(in->rest) : in->rest;
    const double observed = air ? lxg_line_vacuum(in->value) : in->value;
    const double q = observed / rest, q2 = q * q + 1.0;
    *velocity = lxg_line_doppler(q);
    *sigma = 4.0 * LXG_SPEED_OF_LIGHT * q / (q2 * q2) * in->error * (observed / in->value) / rest;
  } else if (in->measure == LXG_LINE_HALF_WIDTH) {
    const double y = in->value / in->rest; /* the index of air divides out */
    const double root = sqrt(1.0 + y * y);
    *velocity = -LXG_SPEED_OF_LIGHT * y / root;
    *sigma = LXG_SPEED_OF_LIGHT / (root * root * root) * in->error / in->rest;
  }
}

/* Fills one line; the text says what is wrong, NULL if nothing is. */
static const char *make_line(const struct lxg_line_input *in, struct lxg_line *line, const char **code) {
  const char *wrong = check_choice(in, code);
  wrong = wrong != NULL ? wrong : check_numbers(in, code);
  if (wrong != NULL) {
    return wrong;
  }
  double velocity = 0.0;
  convert(in, &velocity, &line->error);
  line->epoch = in->epoch;
  line->kind = in->kind;
  if (in->kind == LXG_LINE_EMISSION_PEAK) {
    line->velocity = velocity;
    return NULL;
  }
  line->velocity = is_width(in->kind) ? fabs(velocity) : -velocity;
  *code = "line-redward";
  return line->velocity > 0.0 ? NULL : "an absorption that does not approach is no sign of expansion";
}

/* Notes one bad row: the first is the cause, the next ones contexts while there is room for the total. */
static void note(const struct lxg_line_input *in, size_t row, const char *wrong, const char *code, size_t bad,
                 struct lxg_error *error) {
  const char *const label = in->label != NULL ? in->label : "";
  if (bad == 1) {
    lxg_error_set(error, LXG_INPUT, code, "row %zu (%s): value %.10g, error %.10g: %s", row, label, in->value,
                  in->error, wrong);
  } else if (error != NULL && error->count < LXG_ERROR_LINES - 1) {
    lxg_error_context(error, "checking row %zu (%s): value %.10g, error %.10g: %s", row, label, in->value,
                      in->error, wrong);
  }
}

static enum lxg_status fill(const struct lxg_line_input input[], struct lxg_lines *lines,
                            struct lxg_error *error) {
  size_t bad = 0;
  for (size_t i = 0; i < lines->count; i++) {
    const struct lxg_line_input *const in = &input[i];
    struct lxg_line *const line = &lines->line[i];
    const char *code = "";
    line->row = in->row != 0 ? in->row : i + 1;
    line->label = lxg_strdup(in->label != NULL ? in->label : "");
    line->component = lxg_strdup(in->component != NULL ? in->component : "");
    if (line->label == NULL || line->component == NULL) {
      return lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for %zu line measurements",
                           lines->count);
    }
    const char *const wrong = make_line(in, line, &code);
    if (wrong != NULL) {
      note(in, line->row, wrong, code, ++bad, error);
    }
  }
  if (bad > 0) {
    lxg_error_context(error, "checking %zu line measurements, of which %zu %s bad", lines->count, bad,
                      bad == 1 ? "is" : "are");
    return LXG_INPUT;
  }
  return LXG_OK;
}

enum lxg_status lxg_lines_create(const struct lxg_line_input input[], size_t count, struct lxg_lines **lines,
                                 struct lxg_error *error) {
  *lines = NULL;
  if (count == 0) {
    return lxg_error_set(error, LXG_INPUT, "line-count", "line measurements = 0: at least 1");
  }
  struct lxg_lines *const made = lxg_alloc(1, sizeof *made);
  if (made != NULL) {
    made->line = lxg_alloc(count, sizeof *made->line);
  }
  enum lxg_status status = LXG_MEMORY;
  if (made != NULL && made->line != NULL) {
    made->count = count;
    status = fill(input, made, error);
  } else {
    lxg_error_set(error, LXG_MEMORY, "memory", "out of memory for %zu line measurements", count);
  }
  if (status != LXG_OK) {
    lxg_lines_destroy(made);
    return status;
  }
  *lines = made;
  return LXG_OK;
}

void lxg_lines_destroy(struct lxg_lines *lines) {
  if (lines != NULL) {
    for (size_t i = 0; i < lines->count; i++) {
      lxg_free(lines->line[i].label);
      lxg_free(lines->line[i].component);
    }
    lxg_free(lines->line);
    lxg_free(lines);
  }
}
