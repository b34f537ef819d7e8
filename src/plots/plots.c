/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * plots.c - the table of pictures, and the folder they go to (see plots.h).
 */
#include "luxgale/plots.h"
#include "luxgale/memory.h"
#include "luxgale/output.h"
#include "plots/plots_internal.h"

#include <dirent.h>
#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

static const struct plots_picture pictures[] = {
    {"luminosity",
     "Luminosity against time; shaded: brighter than the Eddington luminosity.",
     {"time_d", "luminosity_ledd"},
     430,
     NULL,
     lxg_plots_luminosity},
    {"mass-loss",
     "Mass-loss rate of the wind.",
     {"time_d", "mass_loss_rate_msun_yr"},
     430,
     NULL,
     lxg_plots_rate},
    {"speed",
     "Speed of the gas, and the observed lines where they are given.",
     {"time_d", "terminal_speed_km_s"},
     430,
     NULL,
     lxg_plots_speed},
    {"photosphere",
     "Radius and temperature of the photosphere.",
     {"time_d", "photosphere_radius_rsun", "photosphere_temperature_k"},
     620,
     NULL,
     lxg_plots_photosphere},
    {"ejected-mass",
     "Mass thrown out up to each time.",
     {"time_d", "ejected_mass_msun"},
     430,
     NULL,
     lxg_plots_mass},
    {"light-curve",
     "Absolute V magnitude against time, brighter upwards.",
     {"time_d", "v_mag"},
     430,
     NULL,
     lxg_plots_light},
    {"distribution",
     "Ejected mass per unit of speed.",
     {"speed_low_km_s", "speed_high_km_s", "dmdv_at_departure"},
     430,
     NULL,
     lxg_plots_distribution},
    {"structure",
     "Structure of the wind from the star's surface outwards; marked: critical point and photosphere.",
     {"radius_cm", "speed_km_s", "temperature_k", "opacity_cm2_g", "eddington_ratio", "mach"},
     680,
     NULL,
     lxg_plots_structure},
    {"opacity-map",
     "Opacity that the wind passes through on its way out.",
     {"log_temperature", "log_r", "log_opacity"},
     520,
     lxg_plots_map_settings,
     lxg_plots_map},
    {"family",
     "All winds with the held quantity: each point of the line is one wind.",
     {"photosphere_luminosity_erg_s", "mass_loss_rate_msun_yr", "terminal_speed_km_s", "launch_radius_cm"},
     620,
     NULL,
     lxg_plots_family},
};
enum { PICTURES = sizeof pictures / sizeof pictures[0] };
_Static_assert((int)PICTURES <= (int)LXG_PLOTS_MOST, "room for every picture");

static enum lxg_status failure(struct lxg_error *error, const char *code, const char *path) {
  const int number = errno;
  char text[128];
  const char *const reason = strerror_r(number, text, sizeof text) == 0 ? text : "unknown reason";
  return lxg_error_set(error, LXG_IO, code, "%s: error: the folder of the pictures cannot be made: %s", path,
                       reason);
}

static enum lxg_status make_folder(const char *folder, struct lxg_error *error) {
  struct stat there;
  if (mkdir(folder, 0777) == 0) {
    return LXG_OK;
  }
  if (errno == EEXIST && stat(folder, &there) == 0 && !S_ISDIR(there.st_mode)) {
    errno = ENOTDIR;
  } else if (errno == EEXIST) {
    return LXG_OK;
  }
  return failure(error, "plots-folder", folder);
}

static enum lxg_status put(const char *folder, const char *name, const char *suffix,
                           const struct lxg_buffer *bytes, struct lxg_error *error) {
  struct lxg_buffer path = {0};
  lxg_buffer_format(&path, "%s/%s%s", folder, name, suffix);
  enum lxg_status status = lxg_buffer_status(&path, error);
  if (status == LXG_OK) {
    status = lxg_buffer_status(bytes, error);
  }
  if (status == LXG_OK) {
    status = lxg_output_write(path.data, bytes->data, bytes->size, error);
  }
  lxg_buffer_free(&path);
  return status;
}

static enum lxg_status put_table(const char *folder, const struct lxg_plots_table *table,
                                 struct lxg_error *error) {
  struct lxg_buffer bytes = {0};
  enum lxg_status status = lxg_table_write_ecsv(table->table, &bytes, error);
  if (status == LXG_OK) {
    status = put(folder, table->name, ".ecsv", &bytes, error);
  }
  lxg_buffer_free(&bytes);
  return status;
}

/* One picture: script, then drawing. A remark stops further drawing, not further scripts. */
static enum lxg_status draw(const struct plots_picture *picture, struct plots_sheet *sheet,
                            const char *folder, struct lxg_plots *plots, struct lxg_error *error) {
  struct lxg_buffer script = {0};
  sheet->script = &script;
  lxg_plots_script(picture, sheet);
  enum lxg_status status = put(folder, picture->name, ".gp", &script, error);
  lxg_buffer_free(&script);
  plots->scripts += status == LXG_OK;
  if (status == LXG_OK && plots->remark[0] == '\0') {
    struct lxg_picture *next = &plots->picture[plots->count];
    bool drawn = false;
    status = lxg_plots_run(folder, picture->name, next, &drawn, plots->remark, error);
    if (drawn) {
      next->name = picture->name;
      next->caption = picture->caption;
      plots->count++;
    }
  }
  return status;
}

enum lxg_status lxg_plots_draw(const struct lxg_plots_input *input, const char *folder,
                               struct lxg_plots *plots, struct lxg_error *error) {
  *plots = (struct lxg_plots){0};
  enum lxg_status status = make_folder(folder, error);
  for (size_t t = 0; t < input->tables && status == LXG_OK; t++) {
    if (input->table[t].table != NULL) {
      status = put_table(folder, &input->table[t], error);
    }
  }
  for (size_t i = 0; i < (size_t)PICTURES && status == LXG_OK; i++) {
    struct plots_sheet sheet = {.input = input, .data = lxg_plots_find(input, pictures[i].needs)};
    if (sheet.data != NULL) {
      status = draw(&pictures[i], &sheet, folder, plots, error);
    }
  }
  return status;
}

/* Removes the files of a folder that this module made, and the folder. Best effort. */
static void remove_folder(const char *folder) {
  DIR *const open = opendir(folder);
  for (const struct dirent *entry = open != NULL ? readdir(open) : NULL; entry != NULL;
       entry = readdir(open)) {
    if (strcmp(entry->d_name, ".") != 0 && strcmp(entry->d_name, "..") != 0) {
      unlinkat(dirfd(open), entry->d_name, 0);
    }
  }
  if (open != NULL) {
    closedir(open);
  }
  rmdir(folder);
}

enum lxg_status lxg_plots_draw_inside(const struct lxg_plots_input *input, struct lxg_plots *plots,
                                      struct lxg_error *error) {
  const char *const above = getenv("TMPDIR");
  struct lxg_buffer folder = {0};
  *plots = (struct lxg_plots){0};
  lxg_buffer_format(&folder, "%s/luxgale-pictures-XXXXXX",
                    above != NULL && above[0] != '\0' ? above : "/tmp");
  enum lxg_status status = lxg_buffer_status(&folder, error);
  if (status == LXG_OK && mkdtemp(folder.data) == NULL) {
    status = failure(error, "plots-folder", folder.data);
  } else if (status == LXG_OK) {
    status = lxg_plots_draw(input, folder.data, plots, error);
    remove_folder(folder.data);
  }
  lxg_buffer_free(&folder);
  return status;
}

void lxg_plots_free(struct lxg_plots *plots) {
  for (size_t i = 0; plots != NULL && i < plots->count; i++) {
    lxg_free(plots->picture[i].svg);
    plots->picture[i].svg = NULL;
  }
}
