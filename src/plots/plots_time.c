/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * plots_time.c - bodies of the pictures against time: luminosity, mass-loss rate, speed, photosphere, ejected mass (see plots.h).
 */
#include "luxgale/constants.h"
#include "plots/plots_internal.h"

#include <math.h>
#include <string.h>

/* A range this wide is drawn on a logarithmic axis. */
static const double log_span = 8.0;

/* A logarithmic axis reaches no deeper below the largest value. */
static const double log_depth = 1e5;

/* Upper margin of a linear axis, for the key. */
static const double headroom = 1.18;

/* Time axis over the whole history, also where a curve has no values. */
static void time_axis(struct plots_sheet *sheet) {
  double first = 0.0, last = 0.0;
  struct lxg_buffer *out = sheet->script;
  if (lxg_plots_range(sheet->data->table, "time_d", &first, &last) && last > first) {
    lxg_buffer_text(out, "  set xrange [");
    lxg_buffer_number(out, first);
    lxg_buffer_text(out, ":");
    lxg_buffer_number(out, last);
    lxg_buffer_text(out, "]\n");
  }
  lxg_buffer_text(out, "  set xlabel 'time (d)'\n");
}

/* A logarithmic axis where the values need it, else a linear one from zero. */
static void value_axis(struct plots_sheet *sheet, const char *column, const char *label) {
  struct lxg_buffer *out = sheet->script;
  double least = 0.0, most = 0.0;
  lxg_plots_range(sheet->data->table, column, &least, &most);
  const struct lxg_column *const values = lxg_table_find(sheet->data->table, column);
  least = most; /* zeros have no place on a logarithmic axis */
  for (size_t i = 0; i < sheet->data->table->rows; i++) {
    least = values->number[i] > 0.0 ? fmin(least, values->number[i]) : least;
  }
  if (least > 0.0 && most > log_span * least) {
    lxg_plots_line(sheet, "  set logscale y\n  set format y '10^{%L}'\n  set mytics 10\n  set yrange [",
                   fmax(0.5 * least, most / log_depth), ":*]");
  } else {
    lxg_buffer_text(out, "  unset logscale y\n  set format y '%g'\n  set mytics default\n  set yrange [0:");
    lxg_buffer_number(out, most > 0.0 ? headroom * most : 1.0);
    lxg_buffer_text(out, "]\n");
  }
  lxg_buffer_format(out, "  set ylabel '%s'\n", label);
}

/* What the luminosity of the history is, in words. */
static const char *history_title(const struct plots_sheet *sheet) {
  const char *const kind = lxg_plots_text(sheet, "case.luminosity.kind");
  const char *const command = lxg_plots_text(sheet, "program.command");
  if (command == NULL || strcmp(command, "outburst") != 0) {
    return "at the photosphere";
  }
  if (kind != NULL && strcmp(kind, "base") == 0) {
    return "given, at the base";
  }
  return kind != NULL ? "given, at the photosphere" : "luminosity";
}

/* The span above L_Edd as a tinted strip with its duration, only where the luminosity stays above without a pause. */
static void super_eddington_strip(struct plots_sheet *sheet) {
  const double first = lxg_plots_number(sheet, "super_eddington.first_d");
  const double last = lxg_plots_number(sheet, "super_eddington.last_d");
  const double duration = lxg_plots_number(sheet, "super_eddington.duration_d");
  if (!(duration > 0.999 * (last - first))) {
    return;
  }
  struct lxg_buffer *out = sheet->script;
  lxg_buffer_text(out, "  set object 1 rectangle from first ");
  lxg_buffer_number(out, first);
  lxg_buffer_text(out, ", graph 0 to first ");
  lxg_buffer_number(out, last);
  lxg_buffer_text(out, ", graph 1 fillcolor rgb '#fbeedd' fillstyle solid noborder behind\n");
}

void lxg_plots_luminosity(struct plots_sheet *sheet) {
  struct lxg_buffer *out = sheet->script;
  const double l_edd = lxg_plots_number(sheet, "star.eddington_luminosity_erg_s");
  const double duration = lxg_plots_number(sheet, "super_eddington.duration_d");
  const char *const file = sheet->data->name;
  double least = 0.0, most = 0.0, other = 0.0;
  time_axis(sheet);
  super_eddington_strip(sheet);
  lxg_plots_range(sheet->data->table, "luminosity_ledd", &least, &most);
  if (lxg_plots_has(sheet, "photosphere_luminosity_erg_s") && isfinite(l_edd)) {
    lxg_plots_range(sheet->data->table, "photosphere_luminosity_erg_s", &least, &other);
    most = fmax(most, other / l_edd);
  }
  lxg_plots_line(sheet, "  set yrange [0:", headroom * fmax(most, 1.0), "]");
  lxg_buffer_text(out, "  set ylabel 'luminosity (L_{Edd})'\n");
  if (isfinite(l_edd)) {
    const int power = (int)floor(log10(l_edd));
    lxg_buffer_format(out,
                      "  set ytics nomirror\n  set y2tics\n  set y2label 'luminosity (10^{%d} erg s^{-1})'\n "
                      " set rmargin 10\n"
                      "  set y2range [0:",
                      power);
    lxg_buffer_number(out, headroom * fmax(most, 1.0) * l_edd / pow(10.0, power));
    lxg_buffer_text(out, "]\n");
  }
  if (duration > 0.0) {
    lxg_buffer_text(out, "  set label 3 'L > L_{Edd}: '.sprintf('%.3g', ");
    lxg_buffer_number(out, duration);
    lxg_buffer_text(out, ").' d' at first ");
    lxg_buffer_number(out, lxg_plots_number(sheet, "super_eddington.first_d"));
    lxg_buffer_text(out, ", graph 0.06 left offset 0.6,0 font ',12' textcolor rgb '#8a4a12'\n");
  }
  lxg_buffer_format(
      out,
      "  plot '%s.ecsv' using 'time_d':'luminosity_ledd' with filledcurves above y=1 fillcolor rgb "
      "'#eab98c' notitle, \\\n    1 with lines ls 6 title 'Eddington'",
      file);
  lxg_plots_curve(sheet, false, "time_d", "luminosity_ledd", 1, history_title(sheet));
  if (lxg_plots_has(sheet, "photosphere_luminosity_erg_s") && isfinite(l_edd)) {
    const bool base = strcmp(history_title(sheet), "given, at the base") == 0;
    const char *const column = base ? "photosphere_luminosity_erg_s" : "base_luminosity_erg_s";
    lxg_buffer_format(out, ", \\\n    '%s.ecsv' using 'time_d':(column('%s')/", file, column);
    lxg_buffer_number(out, l_edd);
    lxg_buffer_format(out, ") with lines ls 2 title '%s'", base ? "at the photosphere" : "at the base");
  }
  lxg_buffer_text(out, "\n");
}

void lxg_plots_rate(struct plots_sheet *sheet) {
  time_axis(sheet);
  super_eddington_strip(sheet);
  value_axis(sheet, "mass_loss_rate_msun_yr", "mass-loss rate (M_☉ yr^{-1})");
  lxg_buffer_text(sheet->script, "  plot ");
  lxg_plots_curve(sheet, true, "time_d", "mass_loss_rate_msun_yr", 1, "wind");
  if (lxg_plots_has(sheet, "burning_rate_msun_yr")) {
    lxg_plots_curve(sheet, false, "time_d", "burning_rate_msun_yr", 2, "nuclear burning");
  }
  lxg_buffer_text(sheet->script, "\n");
}

/* Tables beside the epochs: observed lines, and the most massive shell. */
static const struct lxg_plots_table *observed(const struct plots_sheet *sheet) {
  static const char *const needs[] = {"time_d", "observed_km_s", NULL};
  return lxg_plots_find(sheet->input, needs);
}

static const struct lxg_plots_table *shell(const struct plots_sheet *sheet) {
  static const char *const needs[] = {"time_d", "speed_km_s", "wind_speed_km_s", NULL};
  return lxg_plots_find(sheet->input, needs);
}

static double largest(const struct lxg_plots_table *table, const char *column, double top) {
  double least = 0.0, most = 0.0;
  const bool any = table != NULL && lxg_plots_range(table->table, column, &least, &most);
  return any ? fmax(top, fmax(most, -least)) : top;
}

void lxg_plots_speed(struct plots_sheet *sheet) {
  struct lxg_buffer *out = sheet->script;
  const struct lxg_plots_table *const lines = observed(sheet), *const swept = shell(sheet);
  const bool photosphere = lxg_plots_has(sheet, "photosphere_speed_km_s");
  double top = largest(sheet->data, "terminal_speed_km_s", 1.0);
  top = largest(sheet->data, "photosphere_speed_km_s", top);
  top = largest(lines, "observed_km_s", largest(swept, "speed_km_s", top));
  time_axis(sheet);
  lxg_plots_line(sheet, "  set yrange [0:", headroom * top, "]");
  lxg_buffer_text(out, "  set ylabel 'speed (km s^{-1})'\n  plot ");
  lxg_plots_curve(sheet, true, "time_d", "terminal_speed_km_s", 1, "far away");
  if (photosphere) {
    lxg_plots_curve(sheet, false, "time_d", "photosphere_speed_km_s", 2, "at the photosphere");
  }
  if (swept != NULL) {
    lxg_buffer_format(
        out, ", \\\n    '%s.ecsv' using 'time_d':'speed_km_s' with lines ls 3 title 'swept-up shell'",
        swept->name);
  }
  if (lines != NULL) {
    const bool errors = lxg_table_find(lines->table, "error_km_s") != NULL;
    lxg_buffer_format(
        out,
        ", \\\n    '%s.ecsv' using 'time_d':(abs(column('observed_km_s')))%s ls 5 title 'observed lines'",
        lines->name, errors ? ":'error_km_s' with yerrorbars" : " with points");
  }
  lxg_buffer_text(out, "\n");
}

void lxg_plots_photosphere(struct plots_sheet *sheet) {
  struct lxg_buffer *out = sheet->script;
  lxg_buffer_text(out,
                  "  set multiplot layout 2,1 margins 0.115,0.96,0.1,0.9 spacing 0,0.14\n  set key off\n");
  time_axis(sheet);
  value_axis(sheet, "photosphere_radius_rsun", "R_{ph} (R_☉)");
  lxg_buffer_text(out, "  plot ");
  lxg_plots_curve(sheet, true, "time_d", "photosphere_radius_rsun", 1, NULL);
  lxg_buffer_text(out, "\n  unset label 9\n");
  value_axis(sheet, "photosphere_temperature_k", "T_{ph} (K)");
  lxg_buffer_text(out, "  plot ");
  lxg_plots_curve(sheet, true, "time_d", "photosphere_temperature_k", 2, NULL);
  lxg_buffer_text(out, "\n  unset multiplot\n  set key on\n");
}

/* Magnitudes, brighter upwards: the brightest light, and the single ones where the table has them. */
void lxg_plots_light(struct plots_sheet *sheet) {
  static const struct {
    const char *column, *title;
    int style;
  } curves[] = {
      {"v_black_body_mag", "photosphere", 2}, {"v_free_free_mag", "wind", 3}, {"v_shell_mag", "shell", 4}};
  static const double margin = 1.0, depth = 12.0; /* [mag] above the peak and below it */
  double least = 0.0, most = 0.0;
  time_axis(sheet);
  lxg_plots_range(sheet->data->table, "v_mag", &least, &most);
  lxg_plots_line(sheet, "  set yrange [", fmin(most + margin, least + depth), ":\\");
  lxg_plots_line(sheet, "    ", least - margin, "]");
  lxg_buffer_text(sheet->script, "  set ylabel 'M_V (mag)'\n  plot ");
  bool first = true;
  for (size_t i = 0; i < sizeof curves / sizeof curves[0]; i++) {
    if (lxg_plots_has(sheet, curves[i].column)) {
      lxg_plots_curve(sheet, first, "time_d", curves[i].column, curves[i].style, curves[i].title);
      first = false;
    }
  }
  lxg_plots_curve(sheet, first, "time_d", "v_mag", 1, "brightest of them");
  lxg_buffer_text(sheet->script, "\n");
}

/* Linear from zero in a power of ten, so that the axis reads without exponents at every tic. */
void lxg_plots_mass(struct plots_sheet *sheet) {
  struct lxg_buffer *out = sheet->script;
  double least = 0.0, most = 0.0, high = 0.0;
  lxg_plots_range(sheet->data->table, "ejected_mass_msun", &least, &most);
  if (lxg_plots_range(sheet->data->table, "ejected_mass_msun_hi", &least, &high)) {
    most = fmax(most, high);
  }
  const int power = most > 0.0 ? (int)floor(log10(most)) : 0;
  time_axis(sheet);
  super_eddington_strip(sheet);
  lxg_buffer_format(out, "  unit = 1e%d\n  set ylabel 'ejected mass (10^{%d} M_☉)'\n", power, power);
  lxg_plots_line(sheet, "  set yrange [0:", most > 0.0 ? headroom * most / pow(10.0, power) : 1.0, "]");
  lxg_buffer_text(out, "  plot ");
  if (lxg_plots_has(sheet, "ejected_mass_msun_lo") && lxg_plots_has(sheet, "ejected_mass_msun_hi")) {
    lxg_buffer_format(out,
                      "'%s.ecsv' using "
                      "'time_d':(column('ejected_mass_msun_lo')/unit):(column('ejected_mass_msun_hi')/unit) "
                      "with filledcurves fillcolor rgb '#b9cbe0' title '16th to 84th percentile', \\\n    ",
                      sheet->data->name);
  }
  lxg_buffer_format(out,
                    "'%s.ecsv' using 'time_d':(column('ejected_mass_msun')/unit) with lines ls 1 title "
                    "'thrown out so far'\n",
                    sheet->data->name);
}
