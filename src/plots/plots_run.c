/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * plots_run.c - gnuplot drawing one script, and the check of what it drew (see plots.h).
 *
 * gnuplot ends with status 0 even when its output could not be written, so a picture goes to a temporary name, its first
 * bytes and its end are checked, and only then it takes its name. Signals to stop are held back meanwhile: nothing half drawn stays.
 */
#define _GNU_SOURCE /* posix_spawn_file_actions_addchdir_np */

#include "luxgale/memory.h"
#include "plots/plots_internal.h"

#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <spawn.h>
#include <stdio.h>
#include <string.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

/* Longest time that one drawing may take [polls of 5 ms], then it is ended: 60 s. */
enum { MOST_POLLS = 12000, POLL_NS = 5000000, PICTURE_MOST = 64 << 20, TAIL = 16 };

extern char **environ;

/* Form of a picture: suffix, first bytes, last bytes (with white space after them). */
static const struct form {
  const char *suffix, *head, *tail;
} forms[] = {{"svg", "<?xml", "</svg>"}, {"pdf", "%PDF-", "%%EOF"}, {"png", "\x89PNG\r\n\x1a\n", "IEND"}};
enum { FORMS = sizeof forms / sizeof forms[0] };

static void hold_signals(sigset_t *stop, sigset_t *before) {
  sigemptyset(stop);
  sigaddset(stop, SIGINT);
  sigaddset(stop, SIGTERM);
  sigaddset(stop, SIGHUP);
  pthread_sigmask(SIG_BLOCK, stop, before);
}

static bool stop_pending(void) {
  sigset_t pending;
  sigpending(&pending);
  return sigismember(&pending, SIGINT) == 1 || sigismember(&pending, SIGTERM) == 1 ||
         sigismember(&pending, SIGHUP) == 1;
}

/* Starts `gnuplot -d -e "out='PREFIX'" NAME.gp` in the folder; 0 or an error number. */
static int start(const char *folder, const char *setting, const char *script, pid_t *child) {
  posix_spawn_file_actions_t actions;
  posix_spawnattr_t attributes;
  sigset_t none, usual;
  sigemptyset(&none);
  sigemptyset(&usual);
  sigaddset(&usual, SIGPIPE);
  sigaddset(&usual, SIGXFSZ);
  posix_spawn_file_actions_init(&actions);
  posix_spawnattr_init(&attributes);
  posix_spawnattr_setsigmask(&attributes, &none);
  posix_spawnattr_setsigdefault(&attributes, &usual);
  posix_spawnattr_setflags(&attributes, POSIX_SPAWN_SETSIGMASK | POSIX_SPAWN_SETSIGDEF);
  int number = posix_spawn_file_actions_addchdir_np(&actions, folder);
  for (int stream = 0; number == 0 && stream < 3; stream++) {
    number =
        posix_spawn_file_actions_addopen(&actions, stream, "/dev/null", stream == 0 ? O_RDONLY : O_WRONLY, 0);
  }
  char *const words[] = {"gnuplot", "-d", "-e", (char *)setting, (char *)script, NULL};
  if (number == 0) {
    number = posix_spawnp(child, "gnuplot", &actions, &attributes, words, environ);
  }
  posix_spawnattr_destroy(&attributes);
  posix_spawn_file_actions_destroy(&actions);
  return number;
}

/* Waits for the child; ends it when it takes too long or a signal to stop is pending. True if it ended with status 0. */
static bool finish(pid_t child) {
  const struct timespec nap = {0, POLL_NS};
  int outcome = -1;
  for (int polls = 0;; polls++) {
    const pid_t done = waitpid(child, &outcome, WNOHANG);
    if (done == child) {
      return WIFEXITED(outcome) && WEXITSTATUS(outcome) == 0;
    }
    if (done < 0 && errno != EINTR) {
      return false;
    }
    if (polls == MOST_POLLS || stop_pending()) {
      kill(child, SIGKILL);
      while (waitpid(child, &outcome, 0) < 0 && errno == EINTR) {
      }
      return false;
    }
    nanosleep(&nap, NULL);
  }
}

/* The whole file, terminated, to be freed by lxg_free; NULL unless it begins and ends as the form demands. */
static char *read_whole(const char *path, const struct form *form, size_t *size) {
  FILE *const file = fopen(path, "rb");
  struct stat facts;
  char *bytes = NULL;
  if (file != NULL && fstat(fileno(file), &facts) == 0 && facts.st_size > 2 * TAIL &&
      facts.st_size < PICTURE_MOST) {
    *size = (size_t)facts.st_size;
    bytes = lxg_alloc(*size + 1, 1);
  }
  if (bytes != NULL) {
    const bool read = fread(bytes, 1, *size, file) == *size;
    bytes[*size] = '\0';
    bool ends = false;
    const size_t tail = strlen(form->tail);
    for (size_t i = *size - TAIL; i + tail <= *size; i++) {
      ends = ends || memcmp(bytes + i, form->tail, tail) == 0;
    }
    if (!read || !ends || memcmp(bytes, form->head, strlen(form->head)) != 0) {
      lxg_free(bytes);
      bytes = NULL;
    }
  }
  if (file != NULL) {
    fclose(file);
  }
  return bytes;
}

/* Gives every form its name if all are whole; else removes them. The SVG text is kept. */
static bool take(const char *folder, const char *prefix, const char *name, struct lxg_picture *picture) {
  bool whole = true;
  picture->svg = NULL;
  for (int pass = 0; pass < 2; pass++) { /* check all, then rename all or none */
    for (size_t i = 0; i < FORMS; i++) {
      struct lxg_buffer from = {0}, to = {0};
      lxg_buffer_format(&from, "%s/%s%s.%s", folder, prefix, name, forms[i].suffix);
      lxg_buffer_format(&to, "%s/%s.%s", folder, name, forms[i].suffix);
      size_t size = 0;
      if (from.failed || to.failed) {
        whole = false;
      } else if (pass == 0) {
        char *const bytes = read_whole(from.data, &forms[i], &size);
        whole = whole && bytes != NULL;
        if (i == 0 && bytes != NULL) {
          picture->svg = bytes;
          picture->size = size;
        } else {
          lxg_free(bytes);
        }
      } else if (!whole || rename(from.data, to.data) != 0) {
        unlink(from.data);
        whole = false;
      }
      lxg_buffer_free(&from);
      lxg_buffer_free(&to);
    }
  }
  if (!whole) {
    lxg_free(picture->svg);
    picture->svg = NULL;
  }
  return whole;
}

enum lxg_status lxg_plots_run(const char *folder, const char *name, struct lxg_picture *picture, bool *drawn,
                              char remark[LXG_PLOTS_REMARK_SIZE], struct lxg_error *error) {
  char prefix[48], setting[64], script[64];
  sigset_t stop, before;
  pid_t child = -1;
  snprintf(prefix, sizeof prefix, ".luxgale-%ld-", (long)getpid());
  snprintf(setting, sizeof setting, "out='%s'", prefix);
  snprintf(script, sizeof script, "%s.gp", name);
  hold_signals(&stop, &before);
  const int number = start(folder, setting, script, &child);
  const bool done = number == 0 && finish(child);
  const bool interrupted = stop_pending();
  *drawn = take(folder, prefix, name, picture) && done;
  pthread_sigmask(SIG_SETMASK, &before, NULL);
  if (interrupted) { /* for a caller that holds the signals back itself */
    lxg_free(*drawn ? picture->svg : NULL);
    *drawn = false;
    return lxg_error_set(error, LXG_INTERRUPTED, "interrupted", "drawing was stopped on request");
  }
  if (!*drawn) {
    if (number == ENOENT) {
      snprintf(remark, LXG_PLOTS_REMARK_SIZE,
               "gnuplot is not installed: scripts and data were written, no picture drawn");
    } else {
      snprintf(remark, LXG_PLOTS_REMARK_SIZE,
               "gnuplot could not draw %s.gp (status, or an output that is not whole): try it by hand", name);
    }
  }
  return LXG_OK;
}
