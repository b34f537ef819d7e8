/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * files.h - the files that a case refers to: where relative names start, and a record of what was read with its checksum.
 *
 * Call order: lxg_files_init -> lxg_files_resolve, lxg_files_record for every file -> lxg_files_free.
 */
#ifndef LUXGALE_FILES_H
#define LUXGALE_FILES_H

#include "luxgale/checksum.h"
#include "luxgale/status.h"

#include <stddef.h>

/* One file that was read. */
struct lxg_file {
  char *key;                        /* what asked for it, e.g. "luminosity.file" */
  char *name;                       /* as the case spells it */
  char checksum[LXG_CHECKSUM_SIZE]; /* SHA-256 of its bytes, hexadecimal */
};

/* All-zero is valid: relative names start at the working folder. */
struct lxg_files {
  char *folder; /* of the case, with its final slash; NULL for the working folder */
  size_t count;
  struct lxg_file *file; /* [count] in order of reading */
};

/* Takes the folder of the case file ("-": the working folder). LXG_MEMORY. */
enum lxg_status lxg_files_init(struct lxg_files *files, const char *case_path, struct lxg_error *error);

/* Path of a file named in the case, to be freed by lxg_free. LXG_MEMORY. */
enum lxg_status lxg_files_resolve(const struct lxg_files *files, const char *name, char **path,
                                  struct lxg_error *error);

/* Records a file that was read. LXG_MEMORY. */
enum lxg_status lxg_files_record(struct lxg_files *files, const char *key, const char *name,
                                 const char *checksum, struct lxg_error *error);

/* NULL is allowed. */
void lxg_files_free(struct lxg_files *files);

#endif
