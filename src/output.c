/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * output.c - all or nothing: temporary file, flush, rename, flush of the folder (see output.h).
 */
#include "luxgale/output.h"

#include "luxgale/memory.h"
#include "luxgale/text.h"

#include <dirent.h>
#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <stdbool.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

enum {
  TRIES = 100,      /* temporary names tried while others exist */
  PREFIX_SIZE = 64, /* ".luxgale-TARGET-HOST-" */
  NAME_SIZE = 128,  /* a whole temporary name */
  CHUNK = 1 << 30   /* most bytes in one write */
};

/* Where the target lives and what its temporary names begin with. */
struct place {
  char *folder;             /* path of the folder */
  const char *name;         /* last part of the target's path */
  char prefix[PREFIX_SIZE]; /* of this target on this host */
  int handle;               /* the open folder, -1 if none */
};

static enum lxg_status failure(struct lxg_error *error, const char *code, const char *path, const char *what,
                               int number) {
  char text[128];
  const char *const reason = strerror_r(number, text, sizeof text) == 0 ? text : "unknown reason";
  return lxg_error_set(error, LXG_IO, code, "%s: error: %s: %s", path, what, reason);
}

/* FNV-1a, 32 bits: only tells names apart, no security rests on it. */
static uint32_t hash(const char *text) {
  uint32_t value = 2166136261u;
  for (; *text != '\0'; text++) {
    value = (value ^ (unsigned char)*text) * 16777619u;
  }
  return value;
}

/* 0, or the error number of the first write that failed. */
static int write_all(int file, const char *bytes, size_t size) {
  while (size > 0) {
    const ssize_t written = write(file, bytes, size < CHUNK ? size : CHUNK);
    if (written < 0 && errno == EINTR) {
      continue;
    }
    if (written <= 0) {
      return written < 0 ? errno : EIO;
    }
    bytes += written;
    size -= (size_t)written;
  }
  return 0;
}

static enum lxg_status write_standard(const char *bytes, size_t size, struct lxg_error *error) {
  if (fflush(stdout) != 0) { /* what the program printed before comes first */
    return failure(error, "write-failed", "<stdout>", "cannot be flushed", errno);
  }
  const int number = write_all(STDOUT_FILENO, bytes, size);
  return number == 0 ? LXG_OK : failure(error, "write-failed", "<stdout>", "cannot be written", number);
}

/* A device or pipe: no file can take its place. */
static enum lxg_status write_directly(const char *path, const char *bytes, size_t size,
                                      struct lxg_error *error) {
  const int file = open(path, O_WRONLY | O_CLOEXEC | O_NOCTTY);
  if (file < 0) {
    return failure(error, "write-open", path, "cannot be opened for writing", errno);
  }
  int number = write_all(file, bytes, size);
  if (close(file) != 0 && number == 0) {
    number = errno;
  }
  return number == 0 ? LXG_OK : failure(error, "write-failed", path, "cannot be written", number);
}

static enum lxg_status place_open(const char *path, struct place *place, struct lxg_error *error) {
  const char *const slash = strrchr(path, '/');
  place->name = slash != NULL ? slash + 1 : path;
  place->folder = lxg_strdup(slash != NULL ? path : ".");
  if (place->folder == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "%s: error: out of memory", path);
  }
  if (slash != NULL) {
    place->folder[slash == path ? 1 : slash - path] = '\0';
  }
  if (place->name[0] == '\0' || strcmp(place->name, ".") == 0 || strcmp(place->name, "..") == 0) {
    return failure(error, "write-open", path, "is not the name of a file", EISDIR);
  }
  char host[256] = "";
  if (gethostname(host, sizeof host - 1) != 0) {
    host[0] = '\0';
  }
  snprintf(place->prefix, sizeof place->prefix, ".luxgale-%08x-%08x-", (unsigned)hash(place->name),
           (unsigned)hash(host));
  place->handle = open(place->folder, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
  return place->handle >= 0 ? LXG_OK
                            : failure(error, "write-open", path, "its folder cannot be opened", errno);
}

static void place_close(struct place *place) {
  if (place->handle >= 0) {
    close(place->handle);
  }
  lxg_free(place->folder);
}

/* True if the name is a temporary one of this target whose process is gone. */
static bool is_stale(const struct place *place, const char *name) {
  const size_t prefix = strlen(place->prefix);
  if (strncmp(name, place->prefix, prefix) != 0) {
    return false;
  }
  char *end = NULL;
  const long process = strtol(name + prefix, &end, 10);
  const size_t length = strlen(name);
  const bool ours = *end == '-' && length > 4 && strcmp(name + length - 4, ".tmp") == 0;
  return ours && process > 0 && process <= INT32_MAX && kill((pid_t)process, 0) != 0 && errno == ESRCH;
}

/* Best effort: what cannot be removed does no harm. */
static void remove_stale(const struct place *place) {
  const int copy = openat(place->handle, ".", O_RDONLY | O_DIRECTORY | O_CLOEXEC);
  DIR *const folder = copy >= 0 ? fdopendir(copy) : NULL;
  if (folder == NULL) {
    if (copy >= 0) {
      close(copy);
    }
    return;
  }
  for (const struct dirent *entry = readdir(folder); entry != NULL; entry = readdir(folder)) {
    if (is_stale(place, entry->d_name)) {
      unlinkat(place->handle, entry->d_name, 0);
    }
  }
  closedir(folder);
}

/* Opens a fresh temporary file and tells its name; -1 with errno on failure. */
static int open_temporary(const struct place *place, char name[NAME_SIZE]) {
  for (int i = 0; i < TRIES; i++) {
    snprintf(name, NAME_SIZE, "%s%ld-%d.tmp", place->prefix, (long)getpid(), i);
    const int file = openat(place->handle, name, O_WRONLY | O_CREAT | O_EXCL | O_NOFOLLOW | O_CLOEXEC, 0666);
    if (file >= 0 || errno != EEXIST) {
      return file;
    }
  }
  return -1;
}

/* Writes, flushes and closes; 0 or the first error number. */
static int fill(int file, const struct stat *old, const char *bytes, size_t size) {
  int number = old != NULL && fchmod(file, old->st_mode & 0777) != 0 ? errno : 0;
  if (number == 0) {
    number = write_all(file, bytes, size);
  }
  if (number == 0 && fsync(file) != 0) {
    number = errno;
  }
  if (close(file) != 0 && number == 0) {
    number = errno;
  }
  return number;
}

static enum lxg_status replace(const struct place *place, const struct stat *old, const char *path,
                               const char *bytes, size_t size, struct lxg_error *error) {
  char name[NAME_SIZE];
  const int file = open_temporary(place, name);
  if (file < 0) {
    return failure(error, "write-open", path, "no new file can be made in its folder", errno);
  }
  const int number = fill(file, old, bytes, size);
  if (number != 0) {
    unlinkat(place->handle, name, 0);
    return failure(error, "write-failed", path, "cannot be written", number);
  }
  if (renameat(place->handle, name, place->handle, place->name) != 0) {
    const int reason = errno;
    unlinkat(place->handle, name, 0);
    return failure(error, "write-rename", path, "the new file cannot take its place", reason);
  }
  if (fsync(place->handle) != 0 && errno != EINVAL && errno != EROFS) {
    return failure(error, "write-failed", path, "its folder cannot be flushed", errno);
  }
  return LXG_OK;
}

enum lxg_status lxg_output_write(const char *path, const void *bytes, size_t size, struct lxg_error *error) {
  if (strcmp(path, "-") == 0 || strcmp(path, "/dev/stdout") == 0) {
    return write_standard(bytes, size, error);
  }
  struct stat target;
  const bool exists = stat(path, &target) == 0;
  if (exists && !S_ISREG(target.st_mode) && !S_ISDIR(target.st_mode)) {
    return write_directly(path, bytes, size, error);
  }
  struct place place = {.handle = -1};
  enum lxg_status status = place_open(path, &place, error);
  if (status == LXG_OK) {
    sigset_t stop, before; /* a signal to stop waits until the temporary file is gone */
    sigemptyset(&stop);
    sigaddset(&stop, SIGINT);
    sigaddset(&stop, SIGTERM);
    sigaddset(&stop, SIGHUP);
    pthread_sigmask(SIG_BLOCK, &stop, &before);
    remove_stale(&place);
    status = replace(&place, exists && S_ISREG(target.st_mode) ? &target : NULL, path, bytes, size, error);
    pthread_sigmask(SIG_SETMASK, &before, NULL);
  }
  place_close(&place);
  return status;
}
