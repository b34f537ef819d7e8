/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * files.c - names relative to the case and the record of files read (see files.h).
 */
#include "luxgale/files.h"

#include "luxgale/memory.h"

#include <string.h>

static enum lxg_status out_of_memory(struct lxg_error *error) {
  return lxg_error_set(error, LXG_MEMORY, "memory", "list of files: out of memory");
}

enum lxg_status lxg_files_init(struct lxg_files *files, const char *case_path, struct lxg_error *error) {
  *files = (struct lxg_files){0};
  const char *slash = strrchr(case_path, '/');
  if (slash == NULL) {
    return LXG_OK;
  }
  files->folder = lxg_strdup(case_path);
  if (files->folder == NULL) {
    return out_of_memory(error);
  }
  files->folder[slash - case_path + 1] = '\0';
  return LXG_OK;
}

enum lxg_status lxg_files_resolve(const struct lxg_files *files, const char *name, char **path,
                                  struct lxg_error *error) {
  const char *folder = files->folder == NULL || name[0] == '/' ? "" : files->folder;
  const size_t lead = strlen(folder), rest = strlen(name);
  *path = lxg_alloc(lead + rest + 1, 1);
  if (*path == NULL) {
    return out_of_memory(error);
  }
  memcpy(*path, folder, lead);
  memcpy(*path + lead, name, rest);
  return LXG_OK;
}

enum lxg_status lxg_files_record(struct lxg_files *files, const char *key, const char *name,
                                 const char *checksum, struct lxg_error *error) {
  struct lxg_file *grown = lxg_realloc(files->file, files->count + 1, sizeof *grown);
  if (grown == NULL) {
    return out_of_memory(error);
  }
  files->file = grown;
  struct lxg_file *file = &grown[files->count++];
  *file = (struct lxg_file){.key = lxg_strdup(key), .name = lxg_strdup(name)};
  if (file->key == NULL || file->name == NULL) {
    return out_of_memory(error);
  }
  memcpy(file->checksum, checksum, strnlen(checksum, sizeof file->checksum - 1));
  return LXG_OK;
}

void lxg_files_free(struct lxg_files *files) {
  if (files == NULL) {
    return;
  }
  for (size_t i = 0; i < files->count; i++) {
    lxg_free(files->file[i].key);
    lxg_free(files->file[i].name);
  }
  lxg_free(files->file);
  lxg_free(files->folder);
  *files = (struct lxg_files){0};
}
