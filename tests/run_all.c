/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * run_all.c - runs every suite (or those named on the command line) and ends with Check's summary line.
 */
#include <check.h>
#include <gsl/gsl_errno.h>
#include <stdbool.h>
#include <stdlib.h>
#include <string.h>

#define SUITE(name) Suite *suite_##name(void);
#include "suites.h"
#undef SUITE

static bool wanted(const char *name, int argc, char **argv) {
  for (int i = 1; i < argc; i++) {
    if (strcmp(argv[i], name) == 0) {
      return true;
    }
  }
  return argc <= 1;
}

int main(int argc, char **argv) {
  gsl_set_error_handler_off();
  SRunner *runner = srunner_create(NULL);
#define SUITE(name)                                                                                          \
  if (wanted(#name, argc, argv)) {                                                                           \
    srunner_add_suite(runner, suite_##name());                                                               \
  }
#include "suites.h"
#undef SUITE
  srunner_run_all(runner, CK_NORMAL);
  const int failed = srunner_ntests_failed(runner);
  srunner_free(runner);
  return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
