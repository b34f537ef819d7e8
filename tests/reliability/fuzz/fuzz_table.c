/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * fuzz_table.c - tables (table.h), CSV and ECSV by their first line. A table that was read is taken column by column.
 */
#include "fuzz.h"
#include "luxgale/table.h"

static size_t take(const struct lxg_table *table) {
  size_t used = 0;
  struct lxg_error error = {0};
  for (size_t i = 0; i < table->columns && i < 8; i++) {
    double *values = NULL;
    const struct lxg_column *column = &table->column[i];
    lxg_error_clear(&error);
    const enum lxg_status status =
        lxg_table_cgs(table, column->name, (enum lxg_dimension)(i % LXG_DIMENSION_COUNT), NULL, NULL, i % 2,
                      &values, &error);
    fuzz_explained(status, &error);
    free(values);
    for (size_t row = 0; row < table->rows && row < 3 && column->type == LXG_COLUMN_TEXT; row++) {
      used += strlen(lxg_table_text(table, column, row));
    }
  }
  return used;
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
  struct lxg_table *table = NULL;
  struct lxg_error error = {0};
  const enum lxg_status status = lxg_table_parse((const char *)data, size, "input", NULL, &table, &error);
  fuzz_explained(status, &error);
  if ((status == LXG_OK) != (table != NULL)) {
    abort();
  }
  if (status == LXG_OK) {
    if (take(table) > 3 * 8 * size) {
      abort(); /* fields longer than the file */
    }
  }
  lxg_table_destroy(table);
  return 0;
}
