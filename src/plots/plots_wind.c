/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * plots_wind.c - bodies of the pictures of a wind's structure, the opacity it meets, a family of winds, and the distribution of
 * mass over speed (see plots.h).
 */
#include "luxgale/constants.h"
#include "plots/plots_internal.h"

#include <math.h>
#include <stdio.h>

/* Vertical lines at the critical point and the photosphere; `named` writes their names at the top. */
static void marks(struct plots_sheet *sheet, bool named) {
  static const struct {
    const char *path, *text;
  } places[] = {{"wind.critical.radius_cm", "critical point"},
                {"wind.photosphere.radius_rsun", "photosphere"}};
  struct lxg_buffer *out = sheet->script;
  for (int i = 0; i < 2; i++) {
    const double radius = lxg_plots_number(sheet, places[i].path) * (i == 1 ? LXG_SOLAR_RADIUS : 1.0);
    if (isfinite(radius)) {
      lxg_buffer_format(out, "  set arrow %d from first ", i + 1);
      lxg_buffer_number(out, radius);
      lxg_buffer_text(out, ", graph 0 to first ");
      lxg_buffer_number(out, radius);
      lxg_buffer_text(out, ", graph 1 nohead ls 6 back\n");
      if (named) {
        lxg_buffer_format(out, "  set label %d '%s' at first ", i + 1, places[i].text);
        lxg_buffer_number(out, radius);
        lxg_buffer_text(out, ", graph 0.04 left rotate by 90 offset -0.7,0 font ',11' textcolor rgb grey\n");
      } else {
        lxg_buffer_format(out, "  unset label %d\n", i + 1);
      }
    }
  }
}

void lxg_plots_structure(struct plots_sheet *sheet) {
  struct lxg_buffer *out = sheet->script;
  const char *const file = sheet->data->name;
  double inner = 0.0, outer = 0.0;
  lxg_plots_range(sheet->data->table, "radius_cm", &inner, &outer);
  const double photosphere = lxg_plots_number(sheet, "wind.photosphere.radius_rsun") * LXG_SOLAR_RADIUS;
  outer = isfinite(photosphere) ? 10.0 * photosphere : outer; /* beyond, the gas coasts */
  lxg_buffer_text(out,
                  "  set multiplot layout 2,2 margins 0.12,0.965,0.1,0.865 spacing 0.14,0.15\n"
                  "  set logscale xy\n  set format xy '10^{%L}'\n  set xlabel 'radius (cm)'\n  set xrange [");
  lxg_buffer_number(out, inner);
  lxg_buffer_text(out, ":");
  lxg_buffer_number(out, outer);
  lxg_buffer_text(out, "]\n");
  marks(sheet, true);
  lxg_buffer_format(
      out,
      "  set ylabel 'speed (km s^{-1})'\n  set yrange [*:*]\n  set key font ',11' samplen 1.8 width -2\n"
      "  plot '%s.ecsv' using 'radius_cm':'speed_km_s' with lines ls 1 title 'gas', \\\n"
      "    '%s.ecsv' using 'radius_cm':(column('speed_km_s')/column('mach')) with lines ls 3 title "
      "'sound'",
      file, file);
  const double mass = lxg_plots_number(sheet, "star.mass_msun");
  if (isfinite(mass)) {
    lxg_buffer_text(out, ", \\\n    sqrt(2*");
    lxg_buffer_number(out, mass * LXG_SOLAR_GM);
    lxg_buffer_text(out, "/x)/1e5 with lines ls 6 title 'escape'");
  }
  lxg_buffer_format(out,
                    "\n  set yrange [*:*]\n  set ylabel 'gas temperature (K)'\n  set key off\n  unset label "
                    "1\n  unset label 2\n  unset label 9\n"
                    "  plot '%s.ecsv' using 'radius_cm':'temperature_k' with lines ls 2 dt 1\n",
                    file);
  marks(sheet, false);
  lxg_buffer_format(
      out,
      "  unset logscale y\n  set format y '%%g'\n  set yrange [0:*]\n  set ylabel 'opacity (cm^2 g^{-1})'\n"
      "  plot '%s.ecsv' using 'radius_cm':'opacity_cm2_g' with lines ls 3 dt 1\n"
      "  set ylabel '{/Symbol G} = {/Symbol k} L/(4{/Symbol p} c G M)'\n"
      "  plot '%s.ecsv' using 'radius_cm':'eddington_ratio' with lines ls 4 dt 1, \\\n    1 with lines ls 6\n"
      "  unset multiplot\n  set key on\n",
      file, file);
}

void lxg_plots_map_settings(struct plots_sheet *sheet) {
  lxg_buffer_text(sheet->script, "set palette defined (0 '#f7f4ea', 1 '#e3d3a6', 2 '#d3a067', 3 '#b5644a', 4 "
                                 "'#7d3a4c', 5 '#35224a') maxcolors 20\n"
                                 "unset grid\n");
}

void lxg_plots_map(struct plots_sheet *sheet) {
  static const char *const track[] = {"temperature_k", "density_g_cm3", "radius_cm", NULL};
  struct lxg_buffer *out = sheet->script;
  const struct lxg_plots_table *const wind = lxg_plots_find(sheet->input, track);
  double x0 = 0.0, x1 = 0.0, y0 = 0.0, y1 = 0.0;
  lxg_plots_range(sheet->data->table, "log_temperature", &x0, &x1);
  lxg_plots_range(sheet->data->table, "log_r", &y0, &y1);
  lxg_buffer_text(out, "  set xrange [");
  lxg_buffer_number(out, x1);
  lxg_buffer_text(out, ":");
  lxg_buffer_number(out, x0);
  lxg_buffer_text(out, "]\n  set yrange [");
  lxg_buffer_number(out, y0);
  lxg_buffer_text(out, ":");
  lxg_buffer_number(out, y1);
  lxg_buffer_format(out,
                    "]\n  set xlabel 'log T (K): from the star outwards'\n"
                    "  set ylabel 'log R,  R = {/Symbol r}/(T/10^6 K)^3 (g cm^{-3})'\n"
                    "  set cblabel 'log {/Symbol k} (cm^2 g^{-1})'\n  set rmargin screen 0.84\n"
                    "  plot '%s.ecsv' using 'log_temperature':'log_r':'log_opacity' with image notitle",
                    sheet->data->name);
  if (wind != NULL) {
    const char *const line = "using (log10(column('temperature_k'))):(log10(column('density_g_cm3')/"
                             "(column('temperature_k')/1e6)**3))";
    lxg_buffer_format(out,
                      ", \\\n    '%s.ecsv' %s with lines lc rgb '#ffffff' lw 5 notitle, \\\n"
                      "    '%s.ecsv' %s with lines lc rgb blue lw 2.6 title 'the wind'",
                      wind->name, line, wind->name, line);
    static const char *const site[] = {"critical", "photosphere"};
    for (int i = 0; i < 2; i++) {
      char path[64];
      snprintf(path, sizeof path, "wind.%s.temperature_k", site[i]);
      const double t = lxg_plots_number(sheet, path);
      snprintf(path, sizeof path, "wind.%s.density_g_cm3", site[i]);
      const double rho = lxg_plots_number(sheet, path);
      if (isfinite(t) && isfinite(rho)) {
        lxg_buffer_text(out, ", \\\n    '+' using (");
        lxg_buffer_number(out, log10(t));
        lxg_buffer_text(out, "):(");
        lxg_buffer_number(out, log10(rho / pow(t / 1e6, 3.0)));
        lxg_buffer_format(out, ") every ::0::0 with points pt %d ps 1.4 lw 2 lc rgb '#101010' title '%s'",
                          i == 0 ? 7 : 9, i == 0 ? "critical point" : "photosphere");
      }
    }
  }
  lxg_buffer_text(out, "\n");
}

/* Two panels over the mass-loss rate: luminosity at both ends of the wind, and speed. */
void lxg_plots_family(struct plots_sheet *sheet) {
  static const char *const epochs[] = {"time_d", "mass_loss_rate_msun_yr", "photosphere_luminosity_erg_s",
                                       "terminal_speed_km_s", NULL};
  struct lxg_buffer *out = sheet->script;
  const char *const file = sheet->data->name;
  const double l_edd = lxg_plots_number(sheet, "star.eddington_luminosity_erg_s");
  const struct lxg_plots_table *const history = lxg_plots_find(sheet->input, epochs);
  lxg_buffer_text(out, "  set multiplot layout 2,1 margins 0.115,0.96,0.1,0.86 spacing 0,0.2\n  set logscale "
                       "x\n  set format x '10^{%L}'\n"
                       "  set xlabel 'mass-loss rate (M_☉ yr^{-1})'\n");
  if (isfinite(l_edd)) {
    lxg_plots_line(sheet, "  unit = ", l_edd, "");
    lxg_buffer_text(out, "  set ylabel 'luminosity (L_{Edd})'\n");
  } else {
    lxg_buffer_text(out, "  unit = 1.0\n  set ylabel 'luminosity (erg s^{-1})'\n");
  }
  lxg_buffer_format(out,
                    "  set yrange [0:*]\n  plot '%s.ecsv' using "
                    "'mass_loss_rate_msun_yr':(column('photosphere_luminosity_erg_s')/unit) "
                    "with lines ls 1 title 'at the photosphere'",
                    file);
  if (lxg_plots_has(sheet, "base_luminosity_erg_s")) {
    lxg_buffer_format(
        out,
        ", \\\n    '%s.ecsv' using 'mass_loss_rate_msun_yr':(column('base_luminosity_erg_s')/unit) with "
        "lines ls 2 title 'at the base'",
        file);
  }
  if (history != NULL) {
    lxg_buffer_format(out,
                      ", \\\n    '%s.ecsv' using "
                      "'mass_loss_rate_msun_yr':(column('photosphere_luminosity_erg_s')/unit) with points "
                      "lc rgb '#101010' pt 6 ps 0.8 lw 1.4 title 'epochs'",
                      history->name);
  }
  lxg_buffer_format(out,
                    "\n  unset label 9\n  set ylabel 'speed (km s^{-1})'\n"
                    "  plot '%s.ecsv' using 'mass_loss_rate_msun_yr':'terminal_speed_km_s' with lines ls 1 "
                    "title 'far away'",
                    file);
  if (lxg_plots_has(sheet, "photosphere_speed_km_s")) {
    lxg_buffer_format(out,
                      ", \\\n    '%s.ecsv' using 'mass_loss_rate_msun_yr':'photosphere_speed_km_s' with "
                      "lines ls 2 title 'at the photosphere'",
                      file);
  }
  if (history != NULL) {
    lxg_buffer_format(out,
                      ", \\\n    '%s.ecsv' using 'mass_loss_rate_msun_yr':'terminal_speed_km_s' with points "
                      "lc rgb '#101010' pt 6 ps 0.8 lw 1.4 title 'epochs'",
                      history->name);
  }
  lxg_buffer_text(out, "\n  unset multiplot\n");
}

/* Histograms: the mass as it left, and with the gas of shells at their speeds. */
void lxg_plots_distribution(struct plots_sheet *sheet) {
  static const struct {
    const char *column, *title;
    int style;
  } steps[] = {{"dmdv_at_departure", "as it left", 1}, {"dmdv_with_shell", "with shells swept up", 2}};
  lxg_buffer_text(sheet->script, "  set xlabel 'speed (km s^{-1})'\n  set ylabel 'dM/dv (M_☉ km^{-1} s)'\n"
                                 "  set format y '%.1te%T'\n  set yrange [0:*]\n  plot ");
  for (size_t i = 0; i < sizeof steps / sizeof steps[0]; i++) {
    if (lxg_plots_has(sheet, steps[i].column)) {
      lxg_buffer_format(
          sheet->script,
          "%s'%s.ecsv' using ((column('speed_low_km_s')+column('speed_high_km_s'))/2):'%s' with histeps "
          "ls %d title '%s'",
          i > 0 ? ", \\\n    " : "", sheet->data->name, steps[i].column, steps[i].style, steps[i].title);
    }
  }
  lxg_buffer_text(sheet->script, "\n");
}
