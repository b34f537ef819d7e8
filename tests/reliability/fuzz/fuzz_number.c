/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fuzz_number.c - numbers as text (text.h). What is read is written and read again: the same double.
 */
#include "fuzz.h"
#include "luxgale/text.h"

#include <math.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
  char *text = malloc(size == 0 ? 1 : size); /* not terminated: the length alone counts */
  if (text == NULL) {
    abort();
  }
  memcpy(text, data, size);
  double value = NAN, again = NAN;
  long long integer = 0;
  if (lxg_text_parse_number(text, size, false, &value) == LXG_TEXT_NUMBER) {
    char digits[LXG_TEXT_NUMBER_SIZE];
    const size_t length = lxg_text_format_number(value, digits);
    if (!isfinite(value) || lxg_text_parse_number(digits, length, false, &again) != LXG_TEXT_NUMBER ||
        memcmp(&value, &again, sizeof value) != 0) {
      abort();
    }
  }
  if (lxg_text_parse_integer(text, size, &integer)) {
    char digits[32];
    snprintf(digits, sizeof digits, "%lld", integer);
    long long same = 0;
    if (!lxg_text_parse_integer(digits, strlen(digits), &same) || same != integer) {
      abort();
    }
  }
  lxg_text_utf8(text, size);
  free(text);
  return 0;
}
