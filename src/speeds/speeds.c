/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * speeds.c - which wind belongs to a time, and the speed of each model there (see speeds.h).
 */
#include "speeds/speeds_internal.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"

#include <math.h>

static enum lxg_status create(struct lxg_wind_solver *solver, struct lxg_speeds **speeds,
                              struct lxg_error *error) {
  *speeds = lxg_alloc(1, sizeof **speeds);
  if (*speeds == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "model speeds: out of memory");
  }
  **speeds = (struct lxg_speeds){.solver = solver};
  return LXG_OK;
}

enum lxg_status lxg_speeds_create(const struct lxg_speeds_source *source, struct lxg_wind_solver *solver,
                                  struct lxg_speeds **speeds, struct lxg_error *error) {
  enum lxg_status status = create(solver, speeds, error);
  if (status != LXG_OK) {
    return status;
  }
  struct lxg_speeds *made = *speeds;
  made->family = source->family;
  made->above = source->above;
  made->limit = source->limit;
  made->history = source->history;
  made->factor = source->factor;
  made->branch = source->branch;
  made->hold = source->family->hold;
  made->key = source->history->kind == LXG_HISTORY_BASE ? LXG_FAMILY_BASE_LUMINOSITY
                                                        : LXG_FAMILY_PHOTOSPHERE_LUMINOSITY;
  status = lxg_family_index_create(made->family, made->key, &made->index, error);
  if (status == LXG_OK && made->above != NULL) {
    status = lxg_family_index_create(made->above, made->key, &made->above_index, error);
  }
  if (status == LXG_OK) {
    status = lxg_speeds_eject(made, source->radius, error);
  }
  if (status != LXG_OK) {
    lxg_speeds_destroy(made);
    *speeds = NULL;
  }
  return status;
}

enum lxg_status lxg_speeds_create_single(const struct lxg_wind_hold *hold,
                                         const struct lxg_family_place *place, struct lxg_wind_solver *solver,
                                         struct lxg_speeds **speeds, struct lxg_error *error) {
  const enum lxg_status status = create(solver, speeds, error);
  if (status == LXG_OK) {
    (*speeds)->hold = *hold;
    (*speeds)->single = *place;
  }
  return status;
}

void lxg_speeds_destroy(struct lxg_speeds *speeds) {
  if (speeds == NULL) {
    return;
  }
  for (size_t i = 0; i < speeds->count; i++) {
    lxg_free(speeds->structure[i]->row);
    lxg_free(speeds->structure[i]);
  }
  lxg_free(speeds->structure);
  lxg_shell_destroy(speeds->shell);
  lxg_family_index_destroy(speeds->index);
  lxg_family_index_destroy(speeds->above_index);
  lxg_free(speeds);
}

void lxg_speeds_place(const struct lxg_wind *wind, struct lxg_family_place *place) {
  place->arc = 0.0;
#define SPEEDS_TAKE(name, key, member, scale) place->value[LXG_FAMILY_##name] = wind->member;
  LXG_FAMILY_LIST(SPEEDS_TAKE)
#undef SPEEDS_TAKE
}

/* True if the second family has the winds of this luminosity. */
static bool is_above(const struct lxg_speeds *speeds, double luminosity) {
  return speeds->above != NULL && luminosity > speeds->limit;
}

static size_t members(const struct lxg_speeds *speeds, double luminosity, struct lxg_family_place *place) {
  return lxg_family_index_branch(is_above(speeds, luminosity) ? speeds->above_index : speeds->index,
                                 luminosity, speeds->branch, place);
}

bool lxg_speeds_find(const struct lxg_speeds *speeds, double time, struct lxg_family_place *place) {
  struct lxg_history_value value;
  return lxg_history_at(speeds->history, LXG_HISTORY_VALUE, time, &value) == LXG_OK &&
         members(speeds, speeds->factor * value.luminosity, place) > 0;
}

enum lxg_status lxg_speeds_at(const struct lxg_speeds *speeds, double time, struct lxg_family_place *place,
                              struct lxg_error *error) {
  if (speeds->family == NULL) {
    *place = speeds->single;
    return LXG_OK;
  }
  struct lxg_history_value value;
  if (lxg_history_at(speeds->history, LXG_HISTORY_VALUE, time, &value) != LXG_OK) {
    const struct lxg_history *history = speeds->history;
    return lxg_error_set(error, LXG_DOMAIN, "speeds-time",
                         "time = %.10g d: outside the luminosity history, %.10g to %.10g d", time / LXG_DAY,
                         history->time[0] / LXG_DAY, history->time[history->count - 1] / LXG_DAY);
  }
  const double luminosity = speeds->factor * value.luminosity;
  if (members(speeds, luminosity, place) == 0) {
    const enum lxg_wind_reason reason = lxg_family_missing(
        is_above(speeds, luminosity) ? speeds->above : speeds->family, speeds->key, luminosity);
    return lxg_error_set(error, LXG_NO_SOLUTION, lxg_wind_reason_code(reason), "no wind at %.10g d: %s",
                         time / LXG_DAY, lxg_wind_reason_text(reason));
  }
  return LXG_OK;
}

const struct lxg_shell_history *lxg_speeds_shell(const struct lxg_speeds *speeds) {
  return speeds->shell;
}

bool lxg_speeds_range(const struct lxg_speeds *speeds, double *slowest, double *fastest) {
  *slowest = speeds->slowest;
  *fastest = speeds->fastest;
  return speeds->shell != NULL;
}

/* ---- speeds ------------------------------------------------------------------------------------------------------- */

static enum lxg_status shell_speed(const struct lxg_speeds *speeds, double time, double *velocity,
                                   struct lxg_error *error) {
  struct lxg_shell_state state;
  bool exists = false;
  if (speeds->shell != NULL) {
    const enum lxg_status status = lxg_shell_track(speeds->shell, 1, &time, &state, &exists, error);
    if (status != LXG_OK) {
      return status;
    }
  }
  if (!exists) {
    return lxg_error_set(error, LXG_NO_SOLUTION, "speeds-shell", "%s",
                         speeds->history == NULL ? "without a luminosity history there is no swept shell"
                                                 : "no shell has been swept up by then");
  }
  *velocity = state.speed;
  return LXG_OK;
}

/* Speed where the optical depth from infinity is `depth`; rows run outward, the depth falls. */
static enum lxg_status depth_speed(struct lxg_speeds *speeds, double time, double depth, double *velocity,
                                   struct lxg_error *error) {
  const struct lxg_speeds_structure *structure = NULL;
  const enum lxg_status status = lxg_speeds_structure(speeds, time, &structure, error);
  if (status != LXG_OK) {
    return status;
  }
  const struct lxg_wind_row *row = structure->row;
  size_t i = 1;
  while (i < structure->count && row[i].optical_depth > depth) {
    i++;
  }
  if (i == structure->count || row[0].optical_depth < depth || !(row[i].optical_depth > 0.0)) {
    return lxg_error_set(error, LXG_DOMAIN, "speeds-depth",
                         "optical depth = %.10g: the wind reaches from %.4g to %.4g", depth,
                         row[structure->count - 1].optical_depth, row[0].optical_depth);
  }
  const double outer = log(row[i].optical_depth), inner = log(row[i - 1].optical_depth);
  const double share = (log(depth) - outer) / (inner - outer);
  *velocity = row[i].speed * pow(row[i - 1].speed / row[i].speed, share);
  return LXG_OK;
}

enum lxg_status lxg_speeds_velocity(void *context, double epoch, enum lxg_line_model model, double depth,
                                    double *velocity, struct lxg_error *reason) {
  struct lxg_speeds *speeds = context;
  struct lxg_family_place place;
  if (model == LXG_LINE_MODEL_SHELL) {
    return shell_speed(speeds, epoch, velocity, reason);
  }
  if (model == LXG_LINE_MODEL_DEPTH) {
    return depth_speed(speeds, epoch, depth, velocity, reason);
  }
  const enum lxg_status status = lxg_speeds_at(speeds, epoch, &place, reason);
  if (status == LXG_OK) {
    *velocity = place.value[model == LXG_LINE_MODEL_TERMINAL ? LXG_FAMILY_TERMINAL_SPEED
                                                             : LXG_FAMILY_PHOTOSPHERE_SPEED];
  }
  return status;
}
