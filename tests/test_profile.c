/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_profile.c - line profiles against the analytic limits of expanding shells, an independent evaluation with
 * SciPy (other variables: p and z on each ray), the photon balance of pure scattering, and each other (surface
 * and rays).
 */
#include "helpers.h"
#include "luxgale/constants.h"
#include "luxgale/profile.h"

/* A family of flows on r >= R: speed and density laws of the tests. */
struct test_flow {
  enum { CONSTANT, HOMOLOGOUS, BETA, SLOWING } kind;
  double radius;  /* R */
  double speed;   /* scale */
  double start;   /* BETA: v(R)/speed; SLOWING: index n, v = speed (r/R)^-n */
  double beta;    /* BETA: exponent */
  double density; /* at R */
};

static enum lxg_status test_law(const void *context, double r, struct lxg_profile_gas *gas) {
  const struct test_flow *f = context;
  const double x = f->radius / r, rest = 1.0 - f->start;
  double v0 = f->speed;
  switch (f->kind) {
  case CONSTANT:
    *gas = (struct lxg_profile_gas){.speed = f->speed, .slope = 0.0};
    break;
  case HOMOLOGOUS:
    *gas = (struct lxg_profile_gas){.speed = f->speed / x, .slope = 1.0};
    break;
  case BETA: {
    const double y = fmax(0.0, 1.0 - x);
    const double v = f->start + rest * pow(y, f->beta);
    v0 = f->speed * f->start;
    *gas = (struct lxg_profile_gas){.speed = f->speed * v,
                                    .slope = rest * f->beta * (f->beta == 1.0 ? 1.0 : pow(y, f->beta - 1.0)) *
                                             x / v};
    break;
  }
  case SLOWING:
    *gas = (struct lxg_profile_gas){.speed = f->speed * pow(x, f->start), .slope = -f->start};
    break;
  }
  gas->density = f->kind == HOMOLOGOUS ? f->density : f->density * x * x * v0 / gas->speed;
  return LXG_OK;
}

static struct lxg_profile_flow flow_of(const struct test_flow *f, double outer) {
  return (struct lxg_profile_flow){
      .law = test_law, .context = f, .inner = f->radius, .outer = f->radius * outer};
}

static double flux(const struct lxg_profile_flow *flow, const struct lxg_profile_line *line,
                   const struct lxg_profile_core *core, const struct lxg_profile_settings *settings,
                   double velocity) {
  struct lxg_error error = {0};
  double f = NAN;
  assert_status(lxg_profile_flux(flow, line, core, settings, velocity, &f, &error), LXG_OK, &error);
  return f;
}

static struct lxg_profile compute(const struct lxg_profile_flow *flow, const struct lxg_profile_line *line,
                                  const struct lxg_profile_core *core,
                                  const struct lxg_profile_settings *settings) {
  struct lxg_error error = {0};
  struct lxg_profile profile;
  assert_status(lxg_profile_compute(flow, line, core, settings, &profile, &error), LXG_OK, &error);
  return profile;
}

/* Integrals of Castor's definitions by mpmath with 15 digits; sigma = 0 is closed: beta = (1 - e^-tau)/tau and
 * beta_c = W beta. */
static const struct {
  double depth, sigma, ratio, beta, core;
} escapes[] = {{0.37, -1.0, 1.9, 0.7084713695737, 0.02464369185626},
               {13.0, -1.0, 1.02, 0.0512820120021, 0.0181600304956},
               {1e-3, -1.0, 37.0, 0.9976961476957, 5.774172711339e-5},
               {2.9, 0.83, 1.5, 0.3905681383333, 0.05955705927138},
               {410.0, 95.0, 1.0, 0.07941872768089, 0.03970936384044},
               {0.8, 2500.0, 3.3, 0.9890477599169, 0.02350559457337},
               {7.7, -0.4, 55.0, 0.1125281099442, 6.441065935697e-6}};

START_TEST(escape_probabilities) {
  double beta = 0.0, core = 0.0;
  const double quadrature = 1e-8;
  for (size_t i = 0; i < sizeof escapes / sizeof escapes[0]; i++) {
    lxg_profile_escape(escapes[i].depth, escapes[i].sigma, escapes[i].ratio, &beta, &core);
    assert_close(beta, escapes[i].beta, quadrature);
    assert_close(core, escapes[i].core, quadrature);
  }
  lxg_profile_escape(2.3, 0.0, 1.7, &beta, &core);
  assert_close(beta, -expm1(-2.3) / 2.3, 1e-13);
  assert_close(core, 0.5 * (1.0 - sqrt(1.0 - 1.0 / (1.7 * 1.7))) * beta, 1e-12);
  lxg_profile_escape(1e7, 3.1, 2.0, &beta, &core);
  assert_close(beta, (1.0 + 3.1 / 3.0) / 1e7, 1e-9); /* thick: int w/tau_0 dmu */
  lxg_profile_escape(0.0, 3.1, 2.0, &beta, &core);
  assert_close(beta, 1.0, 1e-13);
}
END_TEST

/* pi e^2/(m_e c) = 0.02654 cm^2 Hz (textbooks, e.g. Rybicki & Lightman 1979: 0.02654). */
START_TEST(line_strength) {
  assert_close(lxg_profile_strength(1.0, 1.0, 1.0), 0.02654, 3e-5);
  assert_close(lxg_profile_strength(0.64, 1.2e-5, 3e19), 0.02654 * 0.64 * 1.2e-5 * 3e19, 3e-5);
}
END_TEST

/* Constant speed, thin: every velocity gets the same light (rectangle), F = 2 pi int r^2 e rho^2/v dr; rho =
 * rho_0 (R/r)^2. */
START_TEST(thin_shell_is_rectangular) {
  const struct test_flow f = {.kind = CONSTANT, .radius = 3.1e12, .speed = 1.37e8, .density = 2.2e-14};
  const struct lxg_profile_flow flow = flow_of(&f, 7.3);
  const struct lxg_profile_line line = {.kind = LXG_PROFILE_RECOMBINATION, .emissivity = 4.4e22};
  const struct lxg_profile_core core = {.transparent = true};
  const double height =
      2.0 * LXG_PI * 4.4e22 * f.density * f.density * pow(f.radius, 3.0) * (1.0 - 1.0 / 7.3) / f.speed;
  for (int i = -9; i <= 9; i++) {
    assert_close(flux(&flow, &line, &core, NULL, 0.111 * i * f.speed), height, 1e-10);
  }
  ck_assert(flux(&flow, &line, &core, NULL, 1.0001 * f.speed) == 0.0);
  struct lxg_profile p = compute(&flow, &line, &core, NULL);
  assert_close(p.emission_half_width, f.speed, 1e-6);
  assert_close(p.line_flux, 2.0 * f.speed * height, 1e-10);
  ck_assert(!p.has_absorption && isnan(p.absorption_speed) && isnan(p.expected_flux) && !p.coupled);
  lxg_profile_free(&p);
}
END_TEST

/* Constant speed, thick: the light is the projected area of the cone, pi (r_2^2 - R^2) (1 - x^2/v^2) S: a
 * parabola with half width v/sqrt 2. With a dark core the receding side lacks p < R: pi S [r_2^2 (1 - x^2/v^2) -
 * R^2]. */
START_TEST(thick_shell_is_parabolic) {
  const struct test_flow f = {.kind = CONSTANT, .radius = 3.1e12, .speed = 1.37e8, .density = 2.2e-14};
  const struct lxg_profile_flow flow = flow_of(&f, 2.9);
  const double opacity =
      1e4 * f.speed / (f.radius * f.density * f.density); /* tau_0 = 1e4 at R, 410 at the end */
  const struct lxg_profile_line line = {
      .kind = LXG_PROFILE_RECOMBINATION, .emissivity = 0.83 * opacity, .opacity = opacity};
  struct lxg_profile_core core = {.transparent = true};
  const double r2 = 2.9 * f.radius, rr = f.radius * f.radius;
  for (int i = -9; i <= 9; i++) {
    const double u = 0.109 * i, area = LXG_PI * (r2 * r2 - rr) * (1.0 - u * u);
    assert_close(flux(&flow, &line, &core, NULL, u * f.speed), 0.83 * area, 1e-10);
  }
  struct lxg_profile p = compute(&flow, &line, &core, NULL);
  assert_close(p.emission_half_width, f.speed / sqrt(2.0), 1e-8);
  assert_near(p.emission_velocity / f.speed, 0.0, 1e-4); /* a maximum is flat: root of rounding */
  lxg_profile_free(&p);
  core.transparent = false;
  for (int i = 1; i <= 8; i++) {
    const double u = 0.109 * i;
    const double hidden = LXG_PI * (r2 * r2 * (1.0 - u * u) - rr);
    assert_close(flux(&flow, &line, &core, NULL, u * f.speed), 0.83 * hidden, 1e-8);
    assert_close(flux(&flow, &line, &core, NULL, -u * f.speed),
                 0.83 * LXG_PI * (r2 * r2 - rr) * (1.0 - u * u), 1e-10);
  }
}
END_TEST

/* Homologous shell of constant density, thin: surfaces are planes, F = pi e rho^2 (R/v_0) (r_2^2 - max(R,
 * R|x|/v_0)^2): flat inside v_0, parabolic wings, symmetric. */
START_TEST(homologous_shell) {
  const struct test_flow f = {.kind = HOMOLOGOUS, .radius = 5.7e13, .speed = 0.61e8, .density = 3.3e-16};
  const struct lxg_profile_flow flow = flow_of(&f, 2.3);
  const struct lxg_profile_line line = {.kind = LXG_PROFILE_RECOMBINATION, .emissivity = 7.1e24};
  const struct lxg_profile_core core = {.transparent = true};
  for (int i = 0; i <= 22; i++) {
    const double u = 0.1 * i, inner = f.radius * fmax(1.0, u), outer = 2.3 * f.radius;
    const double exact =
        LXG_PI * 7.1e24 * f.density * f.density * f.radius / f.speed * (outer - inner) * (outer + inner);
    assert_close(flux(&flow, &line, &core, NULL, u * f.speed), exact, 1e-9);
    assert_close(flux(&flow, &line, &core, NULL, -u * f.speed), exact, 1e-9);
  }
  struct lxg_profile p = compute(&flow, &line, &core, NULL);
  const double emitted =
      4.0 / 3.0 * LXG_PI * 7.1e24 * f.density * f.density * pow(f.radius, 3.0) * (pow(2.3, 3.0) - 1.0);
  assert_close(p.line_flux, emitted, 1e-9); /* all that is emitted: int e rho^2 dV */
  lxg_profile_free(&p);
}
END_TEST

/* v = v_inf [0.013 + 0.987 (1 - 1/r)], r to 80, k rho r/v with k rho = 2.2/(r^2 v) in units of R and v_inf: F/F_c
 * by SciPy (quad over p, brentq for z, quad for beta and beta_c, tolerance 1e-9). */
static const struct {
  double x, flux;
} scipy_profile[] = {{0.93, 0.11702799965382976}, {0.41, 0.47107087501446454}, {0.005, 1.85091983627482},
                     {-0.008, 1.924029012128718}, {-0.27, 1.5528214128191231}, {-0.8, 1.0729671149840245}};

static const struct test_flow beta_flow = {
    .kind = BETA, .radius = 4.2e12, .speed = 1.63e8, .start = 0.013, .beta = 1.0, .density = 1.7e-12};

/* strength for k rho = scale v_inf/R at v = v_inf, r = R */
static double strength_for(const struct test_flow *f, double scale) {
  return scale * f->speed / (f->radius * f->density * f->start);
}

START_TEST(independent_profile) {
  const struct lxg_profile_flow flow = flow_of(&beta_flow, 80.0);
  const struct lxg_profile_line line = {.strength = strength_for(&beta_flow, 2.2)};
  const struct lxg_profile_core core = {.intensity = 0.71};
  const double continuum = LXG_PI * beta_flow.radius * beta_flow.radius * 0.71;
  for (size_t i = 0; i < sizeof scipy_profile / sizeof scipy_profile[0]; i++) {
    const double f = flux(&flow, &line, &core, NULL, -scipy_profile[i].x * beta_flow.speed);
    assert_close(f / continuum, scipy_profile[i].flux, 1e-7);
  }
}
END_TEST

/* Pure scattering makes no light: the line takes away what falls back on the core, integral over velocity against
 * integral over volume. Thin to thick, and two acceleration laws. Relative to what is taken away: 2e-6
 * (quadrature over a profile with corners). */
START_TEST(photons_are_conserved) {
  const double scale[] = {3e-3, 0.3, 2.2, 40.0};
  struct test_flow f = beta_flow;
  f.beta = _i < 4 ? 1.0 : 1.4;
  const struct lxg_profile_flow flow = flow_of(&f, 80.0);
  const struct lxg_profile_line line = {.strength = strength_for(&f, scale[_i % 4]),
                                        .strength_index = _i % 4 == 2 ? 0.6 : 0.0};
  const struct lxg_profile_core core = {.intensity = 0.71};
  struct lxg_profile p = compute(&flow, &line, &core, NULL);
  ck_assert(p.expected_flux < 0.0);
  assert_close(p.line_flux, p.expected_flux, 2e-6);
  ck_assert(p.has_emission && p.emission_velocity > -0.05 * f.speed && !p.coupled);
  if (_i % 4 >= 2) { /* strong lines: blue edge at the terminal speed, trough near it */
    ck_assert(p.has_absorption && p.absorption_depth > 0.5 && p.absorption_depth < 1.0);
    assert_close(p.blue_edge, p.largest_speed, 1e-2);
    ck_assert(p.absorption_speed > 0.5 * f.speed);
  }
  lxg_profile_free(&p);
}
END_TEST

/* A weak line: shallower than the edge depth nowhere counts as absorption. */
START_TEST(no_absorption_is_said) {
  const struct lxg_profile_flow flow = flow_of(&beta_flow, 80.0);
  const struct lxg_profile_line line = {.strength = strength_for(&beta_flow, 1e-6)};
  const struct lxg_profile_core core = {.intensity = 2.0};
  struct lxg_profile p = compute(&flow, &line, &core, NULL);
  ck_assert(!p.has_absorption && isnan(p.absorption_speed) && isnan(p.blue_edge) &&
            isnan(p.absorption_depth));
  lxg_profile_free(&p);
}
END_TEST

/* Error falls at least as n^-4 from 2 to 4 and 8 panels until it meets rounding; the reference has 64. */
START_TEST(convergence) {
  const struct lxg_profile_flow flow = flow_of(&beta_flow, 80.0);
  const struct lxg_profile_line line = {.strength = strength_for(&beta_flow, 2.2)};
  const struct lxg_profile_core core = {.intensity = 0.71};
  struct lxg_profile_settings s;
  lxg_profile_defaults(&s);
  s.panels = 64;
  const double exact = flux(&flow, &line, &core, &s, -0.41 * beta_flow.speed);
  double error[3];
  for (int i = 0; i < 3; i++) {
    s.panels = (size_t)1 << i;
    error[i] = fabs(flux(&flow, &line, &core, &s, -0.41 * beta_flow.speed) / exact - 1.0);
  }
  ck_assert_msg(error[1] < error[0] / 16.0 + 1e-13 && error[2] < error[1] / 16.0 + 1e-13, "%g %g %g",
                error[0], error[1], error[2]);
  ck_assert(error[0] > 1e-13);
}
END_TEST

/* Rays against the surface: 400 rays cut the ends of the surface off at a ray, so 1 % at velocities away from
 * corners, and closer with 4000. */
START_TEST(rays_agree_with_surface) {
  const struct lxg_profile_flow flow = flow_of(&beta_flow, 30.0);
  const struct lxg_profile_line line = {.strength = strength_for(&beta_flow, 2.2)};
  const struct lxg_profile_core core = {.intensity = 0.71};
  struct lxg_profile_settings s;
  lxg_profile_defaults(&s);
  s.by_rays = true;
  for (int i = 0; i < 6; i++) {
    const double v = (-0.87 + 0.33 * i) * beta_flow.speed;
    const double exact = flux(&flow, &line, &core, NULL, v);
    s.rays = 400;
    assert_close(flux(&flow, &line, &core, &s, v), exact, 1e-2);
    s.rays = 4000;
    assert_close(flux(&flow, &line, &core, &s, v), exact, 1e-3);
  }
}
END_TEST

/* A slowing flow, v = v_0 (r/R)^-0.15: thin emission is counted wherever it comes from, int F dv = int e rho^2
 * dV; a black core hides the shadow. Scattering in a flow that slows as r^-1e-5 looks like one of constant speed;
 * in one that slows as r^-0.15 the neglected coupling shows in the photon balance, which is why both numbers are
 * given. */
START_TEST(slowing_flow) {
  const struct test_flow f = {
      .kind = SLOWING, .radius = 1e12, .speed = 1.1e8, .start = 0.15, .density = 1e-13};
  const struct lxg_profile_flow flow = flow_of(&f, 6.0);
  const struct lxg_profile_line line = {.kind = LXG_PROFILE_RECOMBINATION, .emissivity = 1e22};
  const struct lxg_profile_core clear = {.transparent = true};
  struct lxg_profile p = compute(&flow, &line, &clear, NULL);
  const double k = 4.0 * LXG_PI * 1e22 * 1e-26 * pow(f.radius, 3.0);
  /* rho = rho_0 x^(2 - 0.15): int r^2 x^3.7 dr = R^3 (1 - 6^-0.7)/0.7 */
  assert_close(p.line_flux, k * (1.0 - pow(6.0, -0.7)) / 0.7, 1e-8);
  ck_assert(!p.coupled && p.emission_half_width > 0.5 * f.speed);
  assert_close(p.largest_speed, f.speed, 1e-12);
  lxg_profile_free(&p);
  struct test_flow a = f, b = f;
  a.start = 1e-5;
  b.kind = CONSTANT;
  const struct lxg_profile_flow slow = flow_of(&a, 6.0), steady = flow_of(&b, 6.0);
  const struct lxg_profile_line scatter = {.strength = 1.5 * f.speed / (f.radius * f.density)};
  const struct lxg_profile_core core = {.intensity = 3.0};
  for (int i = 0; i < 7; i++) {
    const double v = (-0.83 + 0.27 * i) * f.speed;
    assert_close(flux(&slow, &scatter, &core, NULL, v), flux(&steady, &scatter, &core, NULL, v), 2e-3);
  }
  struct lxg_profile_settings s;
  lxg_profile_defaults(&s);
  s.rays = 200;
  s.count = 41;
  p = compute(&flow, &scatter, &core, &s);
  ck_assert(p.coupled && p.has_absorption);
  const double imbalance = fabs(p.line_flux - p.expected_flux) / (p.continuum * f.speed);
  ck_assert_msg(imbalance > 1e-3 && imbalance < 0.1, "%g", imbalance);
  lxg_profile_free(&p);
}
END_TEST

/* The same flow from 400 rows: Steffen's interpolation is of second order in the slope near curvature, 1e-3 in
 * the profile. */
START_TEST(flow_from_a_table) {
  enum { ROWS = 400 };
  double r[ROWS], v[ROWS], rho[ROWS];
  for (int i = 0; i < ROWS; i++) {
    const double t = (double)i / (ROWS - 1);
    struct lxg_profile_gas gas;
    r[i] = beta_flow.radius * (1.0 + 79.0 * t * t * t);
    test_law(&beta_flow, r[i], &gas);
    v[i] = gas.speed;
    rho[i] = gas.density;
  }
  struct lxg_profile_table *table = NULL;
  struct lxg_error error = {0};
  assert_status(lxg_profile_table_create(ROWS, r, v, rho, &table, &error), LXG_OK, &error);
  const struct lxg_profile_flow flow = lxg_profile_table_flow(table);
  const struct lxg_profile_line line = {.strength = strength_for(&beta_flow, 2.2)};
  const struct lxg_profile_core core = {.intensity = 0.71};
  const double continuum = LXG_PI * beta_flow.radius * beta_flow.radius * 0.71;
  for (size_t i = 0; i < sizeof scipy_profile / sizeof scipy_profile[0]; i++) {
    const double f = flux(&flow, &line, &core, NULL, -scipy_profile[i].x * beta_flow.speed);
    assert_near(f / continuum, scipy_profile[i].flux, 2e-3);
  }
  lxg_profile_table_destroy(table);
}
END_TEST

static void refuse_table(size_t n, const double r[], const double v[], const double rho[], const char *code) {
  struct lxg_profile_table *table = NULL;
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_profile_table_create(n, r, v, rho, &table, &error), LXG_INPUT);
  ck_assert_str_eq(error.code, code);
  ck_assert(table == NULL);
}

static enum lxg_status broken_law(const void *context, double r, struct lxg_profile_gas *gas) {
  *gas = (struct lxg_profile_gas){.speed = 1e8, .slope = 0.0, .density = r > 2e12 ? NAN : 1e-13};
  return context == NULL ? LXG_OK : LXG_NO_SOLUTION;
}

static void refuse(const struct lxg_profile_flow *flow, const struct lxg_profile_line *line,
                   const struct lxg_profile_core *core, const struct lxg_profile_settings *settings,
                   enum lxg_status status, const char *code) {
  struct lxg_error error = {0};
  struct lxg_profile p;
  double f = -1.0;
  ck_assert_int_eq(lxg_profile_compute(flow, line, core, settings, &p, &error), status);
  ck_assert_str_eq(error.code, code);
  ck_assert(p.velocity == NULL && p.count == 0);
  ck_assert_int_eq(lxg_profile_flux(flow, line, core, settings, 0.0, &f, NULL), status);
  ck_assert(f == -1.0);
}

START_TEST(bad_input) {
  const double r[] = {1.0, 2.0, 3.0}, one[] = {1.0, 1.0, 1.0};
  refuse_table(2, r, one, one, "profile-count");
  refuse_table(3, one, one, one, "profile-radius");
  refuse_table(3, r, (double[]){1.0, 0.0, 1.0}, one, "profile-speed");
  refuse_table(3, r, one, (double[]){1.0, 1.0, NAN}, "profile-density");
  lxg_profile_table_destroy(NULL);
  struct lxg_profile_flow flow = flow_of(&beta_flow, 30.0), backwards = flow_of(&beta_flow, 0.5);
  struct lxg_profile_line line = {.strength = 1.0};
  struct lxg_profile_core core = {.intensity = 1.0};
  struct lxg_profile_settings s;
  lxg_profile_defaults(&s);
  refuse(&backwards, &line, &core, NULL, LXG_INPUT, "profile-flow");
  line.strength = -1.0;
  refuse(&flow, &line, &core, NULL, LXG_INPUT, "profile-line");
  line.strength = 1.0;
  core.intensity = 0.0;
  refuse(&flow, &line, &core, NULL, LXG_INPUT, "profile-core");
  core = (struct lxg_profile_core){.intensity = 1.0, .transparent = true};
  refuse(&flow, &line, &core, NULL, LXG_INPUT, "profile-core");
  core.transparent = false;
  s.count = 160;
  refuse(&flow, &line, &core, &s, LXG_INPUT, "profile-settings");
  lxg_profile_defaults(&s);
  s.edge_depth = 1.0;
  refuse(&flow, &line, &core, &s, LXG_INPUT, "profile-settings");
  flow = (struct lxg_profile_flow){.law = broken_law, .inner = 1e12, .outer = 3e12};
  refuse(&flow, &line, &core, NULL, LXG_DOMAIN, "profile-law");
  flow.context = &s;
  refuse(&flow, &line, &core, NULL, LXG_NO_SOLUTION, "profile-law");
}
END_TEST

Suite *suite_profile(void);
Suite *suite_profile(void) {
  Suite *suite = suite_create("profile");
  TCase *tests = tcase_create("profile");
  tcase_set_timeout(tests, 60.0);
  tcase_add_test(tests, escape_probabilities);
  tcase_add_test(tests, line_strength);
  tcase_add_test(tests, thin_shell_is_rectangular);
  tcase_add_test(tests, thick_shell_is_parabolic);
  tcase_add_test(tests, homologous_shell);
  tcase_add_test(tests, independent_profile);
  tcase_add_loop_test(tests, photons_are_conserved, 0, 8);
  tcase_add_test(tests, no_absorption_is_said);
  tcase_add_test(tests, convergence);
  tcase_add_test(tests, rays_agree_with_surface);
  tcase_add_test(tests, slowing_flow);
  tcase_add_test(tests, flow_from_a_table);
  tcase_add_test(tests, bad_input);
  suite_add_tcase(suite, tests);
  return suite;
}
