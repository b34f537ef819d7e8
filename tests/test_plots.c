/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_plots.c - scripts, drawing, and everything that may go wrong with gnuplot: missing, failing, lying about its output, and text of
 * the user that tries to be a command. The oracle for whole pictures is the first bytes that the formats' standards demand
 * (PNG: ISO/IEC 15948, 5.2; PDF: ISO 32000-1, 7.5.2).
 */
#include "helpers.h"
#include "luxgale/plots.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

static char folder[64];

static void make_folder(void) {
  snprintf(folder, sizeof folder, "/tmp/luxgale-test-plots-XXXXXX");
  ck_assert_ptr_nonnull(mkdtemp(folder));
}

static void remove_folder(void) {
  char command[128];
  snprintf(command, sizeof command, "rm -rf '%s'", folder);
  ck_assert_int_eq(system(command), 0);
}

/* Times and ejected masses of three epochs; the middle one misses its mass. */
static struct lxg_table *three_epochs(void) {
  struct lxg_table *table = NULL;
  ck_assert_int_eq(lxg_table_create("epochs", &table, NULL), LXG_OK);
  lxg_table_add_column(table, "time_d", LXG_COLUMN_NUMBER, "d", "", NULL);
  lxg_table_add_column(table, "ejected_mass_msun", LXG_COLUMN_NUMBER, "Msun", "", NULL);
  lxg_table_add_rows(table, 3, NULL);
  for (size_t i = 0; i < 3; i++) {
    lxg_table_set_number(table, 0, i, 2.385 * (double)i, NULL);
  }
  lxg_table_set_number(table, 1, 0, 1.7e-6, NULL);
  lxg_table_set_number(table, 1, 2, 4.3e-6, NULL);
  return table;
}

static enum lxg_status draw(const char *title, const char *where, struct lxg_plots *plots,
                            struct lxg_error *error) {
  struct lxg_table *table = three_epochs();
  struct lxg_document *report = NULL;
  ck_assert_int_eq(lxg_document_create("report", &report, NULL), LXG_OK);
  const struct lxg_plots_table tables[] = {{"structure", NULL}, {"epochs", table}};
  const struct lxg_plots_input input = {title, lxg_document_root(report), tables, 2};
  const enum lxg_status status = where != NULL ? lxg_plots_draw(&input, where, plots, error)
                                               : lxg_plots_draw_inside(&input, plots, error);
  lxg_document_destroy(report);
  lxg_table_destroy(table);
  return status;
}

static bool exists(const char *name) {
  char path[160];
  snprintf(path, sizeof path, "%s/%s", folder, name);
  return access(path, F_OK) == 0;
}

static void begins(const char *name, const char *head, size_t size) {
  char path[160], bytes[16] = "";
  snprintf(path, sizeof path, "%s/%s", folder, name);
  FILE *const file = fopen(path, "rb");
  ck_assert_ptr_nonnull(file);
  ck_assert_uint_eq(fread(bytes, 1, size, file), size);
  fclose(file);
  ck_assert_int_eq(memcmp(bytes, head, size), 0);
}

START_TEST(quote) {
  struct lxg_buffer out = {0};
  lxg_plots_quote(&out, "it's `rm`\n\"$x\"\x7f");
  ck_assert_str_eq(out.data, "'it\xe2\x80\x99s `rm` \"$x\" '");
  lxg_buffer_free(&out);
}
END_TEST

START_TEST(whole) {
  struct lxg_plots plots;
  struct lxg_error error = {0};
  assert_status(draw("three epochs", folder, &plots, &error), LXG_OK, &error);
  ck_assert_str_eq(plots.remark, "");
  ck_assert_uint_eq(plots.count, 1); /* no other picture has its columns */
  ck_assert_str_eq(plots.picture[0].name, "ejected-mass");
  ck_assert_ptr_nonnull(strstr(plots.picture[0].svg, "</svg>"));
  ck_assert_ptr_nonnull(strstr(plots.picture[0].svg, "time (d)"));
  begins("ejected-mass.png", "\x89PNG\r\n\x1a\n", 8);
  begins("ejected-mass.pdf", "%PDF-", 5);
  ck_assert(exists("ejected-mass.gp") && exists("epochs.ecsv"));
  lxg_plots_free(&plots);
  assert_status(draw(NULL, NULL, &plots, &error), LXG_OK, &error); /* and without a folder or a title */
  ck_assert_uint_eq(plots.count, 1);
  lxg_plots_free(&plots);
}
END_TEST

/* Titles that would be commands if gnuplot read them. */
START_TEST(hostile_title) {
  const char *const titles[] = {"'; system('touch intruder') #", "`touch intruder`",
                                "$(touch intruder) @x \\", "a'\nsystem 'touch intruder'\n'", "{/Symbol _^{"};
  for (size_t i = 0; i < sizeof titles / sizeof titles[0]; i++) {
    struct lxg_plots plots;
    struct lxg_error error = {0};
    assert_status(draw(titles[i], folder, &plots, &error), LXG_OK, &error);
    ck_assert_uint_eq(plots.count, 1);
    ck_assert(!exists("intruder"));
    lxg_plots_free(&plots);
  }
}
END_TEST

START_TEST(missing_gnuplot) {
  struct lxg_plots plots;
  struct lxg_error error = {0};
  setenv("PATH", "/nowhere", 1);
  assert_status(draw("t", folder, &plots, &error), LXG_OK, &error);
  setenv("PATH", "/usr/bin:/bin", 1);
  ck_assert_uint_eq(plots.count, 0);
  ck_assert_uint_eq(plots.scripts, 1);
  ck_assert_ptr_nonnull(strstr(plots.remark, "not installed"));
  ck_assert(exists("ejected-mass.gp") && !exists("ejected-mass.svg"));
}
END_TEST

/* A gnuplot that reports success but leaves nothing, a stub, or only some forms: no picture takes its name, no temporary file stays. */
START_TEST(lying_gnuplot) {
  const char *const bodies[] = {
      "exit 0", "exit 3", "for k in svg pdf png; do : > .luxgale-$PPID-ejected-mass.$k; done",
      "printf '<?xml version=\"1.0\"?><svg>%0100d</svg>' 1 > .luxgale-$PPID-ejected-mass.svg",
      "printf '<?xml version=\"1.0\"?><svg>%0100d' 1 > .luxgale-$PPID-ejected-mass.svg"};
  char path[128], search[160];
  snprintf(path, sizeof path, "%s/gnuplot", folder);
  snprintf(search, sizeof search, "%s:/usr/bin:/bin", folder);
  for (size_t i = 0; i < sizeof bodies / sizeof bodies[0]; i++) {
    FILE *const file = fopen(path, "w");
    fprintf(file, "#!/bin/sh\n%s\n", bodies[i]);
    fclose(file);
    chmod(path, 0755);
    setenv("PATH", search, 1);
    struct lxg_plots plots;
    struct lxg_error error = {0};
    assert_status(draw("t", folder, &plots, &error), LXG_OK, &error);
    setenv("PATH", "/usr/bin:/bin", 1);
    ck_assert_uint_eq(plots.count, 0);
    ck_assert_ptr_nonnull(strstr(plots.remark, "could not draw"));
    ck_assert(!exists("ejected-mass.svg"));
    char command[160];
    snprintf(command, sizeof command, "! ls -A '%s' | grep -q '^.luxgale'", folder);
    ck_assert_int_eq(system(command), 0);
  }
}
END_TEST

START_TEST(bad_folder) {
  struct lxg_plots plots;
  struct lxg_error error = {0};
  char path[160];
  snprintf(path, sizeof path, "%s/no/where", folder);
  assert_status(draw("t", path, &plots, &error), LXG_IO, &error);
  ck_assert_str_eq(error.code, "plots-folder");
  assert_status(draw("t", "/dev/null", &plots, &error), LXG_IO, &error);
}
END_TEST

Suite *suite_plots(void);
Suite *suite_plots(void) {
  Suite *suite = suite_create("plots");
  TCase *tests = tcase_create("plots");
  tcase_set_timeout(tests, 60.0);
  tcase_add_checked_fixture(tests, make_folder, remove_folder);
  tcase_add_test(tests, quote);
  tcase_add_test(tests, whole);
  tcase_add_test(tests, hostile_title);
  tcase_add_test(tests, missing_gnuplot);
  tcase_add_test(tests, lying_gnuplot);
  tcase_add_test(tests, bad_folder);
  suite_add_tcase(suite, tests);
  return suite;
}
