/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * luxgale_trap.c - the program with floating-point traps: division by zero or an invalid operation ends it by SIGFPE. Overflow
 * is not trapped: reading "1e999" and the change to CGS find their overflows by it, and every number is checked after.
 */
#define _GNU_SOURCE
#include <fenv.h>

int luxgale_main(int argc, char **argv);

int main(int argc, char **argv) {
  feenableexcept(FE_DIVBYZERO | FE_INVALID);
  return luxgale_main(argc, argv);
}
