/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * faults.c - the whole program with every allocation and every system call of its input and output failing in turn.
 *
 *   faults memory|io|kill OUTPUTS ARGUMENT...     OUTPUTS: comma-separated files that the command writes
 *
 * The program runs in this process, with malloc, calloc, realloc, open, openat, read, write, fsync, close and renameat
 * replaced. At each call a child is forked in which this call fails, and the child runs on to its end:
 *   memory  the allocation fails once; and, in a second child, so do all that follow
 *   io      the call fails with EIO, ENOSPC and EINTR, a write is also cut short
 *   kill    the child is killed (SIGKILL) before and after the call; then the command runs once more
 * Once the first output is being written the children start from there instead, one after the other, so that
 * none sees another's files. A child must end by itself, not by a signal; with exit status 4 (memory) or 3 (io) and a
 * message with a code, or exactly as without the fault; it must free what it allocated; every output must be the old one or the
 * whole new one; and no temporary file may stay (kill: after the next run). Prints one JSON line; exit status 1 on any violation.
 * LXG_WRAP: under sanitizers only the calls of luxgale itself are replaced (--wrap), since the sanitizer owns malloc.
 */
#define _GNU_SOURCE
#include <dirent.h>
#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <stdarg.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/mman.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <sys/syscall.h>
#include <sys/wait.h>
#include <unistd.h>

int luxgale_main(int argc, char **argv);

enum { MOST_OUTPUTS = 4, MOST_BYTES = 1 << 21, CHILD_SECONDS = 120, LEAKED = 99, NOT_HIT = 98 };
enum job { MEMORY, IO, KILL };
enum fault {
  FAIL_ONCE,
  FAIL_ON,
  FAIL_EIO,
  FAIL_ENOSPC,
  FAIL_EINTR,
  FAIL_SHORT,
  KILL_BEFORE,
  KILL_AFTER,
  FAULTS
};
static const char *const fault_name[] = {"once",  "from then on", "EIO",    "ENOSPC",
                                         "EINTR", "short",        "before", "after"};
static const char old_text[] = "the old output\n";

/* One output file. */
struct output {
  const char *path;
  size_t size; /* of the complete new one */
  char *bytes;
};

static struct {
  enum job job;
  int argc;
  char **argv;
  size_t outputs;
  struct output output[MOST_OUTPUTS];
  int clean_status; /* exit status without fault */
  long clean_live;  /* blocks alive at the end without fault */
  bool armed;       /* calls are counted and fork */
  bool child;       /* this process has a fault of its own */
  bool writing;     /* the first output is being written */
  enum fault fault; /* of the child */
  long countdown;   /* calls until the child's fault; 0: never again */
  bool hit;         /* it came */
  long live;        /* blocks alive */
  int messages;     /* where children complain */
  const char *call; /* name of the current call */
  long points, children, handled, refused, violations;
} all;

/* ---- looking at what a child left ---- */

static void violation(const char *what, int value) {
  all.violations++;
  if (all.violations <= 10) {
    char text[512] = "";
    const ssize_t got = pread(all.messages, text, sizeof text - 1, 0);
    dprintf(STDERR_FILENO, "violation: %s (%d) at call %ld, %s %s: %.*s\n", what, value, all.points, all.call,
            fault_name[all.fault], (int)(got > 0 ? got : 0), text);
  }
}

static void put_old(void) {
  for (size_t i = 0; i < all.outputs; i++) {
    const int file =
        (int)syscall(SYS_openat, AT_FDCWD, all.output[i].path, O_WRONLY | O_CREAT | O_TRUNC, 0644);
    if (file < 0 || syscall(SYS_write, file, old_text, sizeof old_text - 1) != (long)sizeof old_text - 1) {
      _exit(97);
    }
    syscall(SYS_close, file);
  }
}

/* Number of outputs that are neither old nor new; `news`: how many are new. */
static int damaged(int *news) {
  static char bytes[MOST_BYTES];
  int bad = 0;
  *news = 0;
  for (size_t i = 0; i < all.outputs; i++) {
    const int file = (int)syscall(SYS_openat, AT_FDCWD, all.output[i].path, O_RDONLY, 0);
    const long got = file < 0 ? -1 : syscall(SYS_read, file, bytes, sizeof bytes);
    syscall(SYS_close, file);
    const bool old = got == (long)sizeof old_text - 1 && memcmp(bytes, old_text, (size_t)got) == 0;
    const bool new = got == (long)all.output[i].size &&memcmp(bytes, all.output[i].bytes, (size_t)got) == 0;
    *news += new;
    bad += !old && !new;
  }
  return bad;
}

/* Temporary files in the working folder; removed if asked for. */
static int temporaries(bool clean) {
  char block[8192];
  int count = 0;
  const int folder = (int)syscall(SYS_openat, AT_FDCWD, ".", O_RDONLY | O_DIRECTORY, 0);
  for (long got; (got = syscall(SYS_getdents64, folder, block, sizeof block)) > 0;) {
    for (long at = 0; at < got;) {
      struct { /* linux_dirent64 */
        unsigned long long inode, offset;
        unsigned short length;
        unsigned char type;
        char name[];
      } *entry = (void *)(block + at);
      if (strncmp(entry->name, ".luxgale-", 9) == 0) {
        count++;
        if (clean) {
          syscall(SYS_unlinkat, folder, entry->name, 0);
        }
      }
      at += entry->length;
    }
  }
  syscall(SYS_close, folder);
  return count;
}

static void judge_end(int state) {
  char text[512] = "";
  const int expected = all.job == MEMORY ? 4 : 3;
  const ssize_t got = pread(all.messages, text, sizeof text - 1, 0);
  int news = 0;
  const int bad = damaged(&news);
  if (!WIFEXITED(state)) {
    violation("ended by signal", WTERMSIG(state));
  } else if (WEXITSTATUS(state) == LEAKED) {
    violation("memory not freed", 0);
  } else if (WEXITSTATUS(state) == all.clean_status) {
    all.handled++;
    if (all.clean_status != expected && news != (int)all.outputs) {
      violation("ended well without its output", news);
    }
  } else if (WEXITSTATUS(state) == expected) {
    all.refused++;
    if (got <= 0 || strchr(text, '[') == NULL) {
      violation("no message", (int)got);
    }
  } else {
    violation("exit status", WEXITSTATUS(state));
  }
  if (bad > 0) {
    violation("damaged outputs", bad);
  }
}

/* The command again, without fault, in a process of its own: a killed run's files must go. */
static void judge_kill(void) {
  int news = 0, state = 0;
  const int bad = damaged(&news);
  if (bad > 0) {
    violation("damaged outputs after a kill", bad);
  }
  if (all.writing) {
    const pid_t child = fork();
    if (child == 0) {
      static char *plain[64] = {"faults", "plain", "-"};
      for (int i = 1; i < all.argc && i < 60; i++) {
        plain[i + 2] = all.argv[i];
      }
      dup2(STDOUT_FILENO, STDERR_FILENO); /* nowhere */
      execv("/proc/self/exe", plain);
      _exit(96);
    }
    waitpid(child, &state, 0);
    if (!WIFEXITED(state) || WEXITSTATUS(state) != all.clean_status || damaged(&news) > 0 ||
        news != (int)all.outputs) {
      violation("the next run failed", state);
    }
    if (temporaries(false) > 0) {
      violation("temporary files outlive the next run", 0);
    }
  }
}

/* ---- forking at a call ---- */

/* True in a child that has to make its current call fail. In the parent: false, after all children of this call. */
static bool one_child(enum fault fault, long countdown, int *state) {
  if (ftruncate(all.messages, 0) != 0) {
    _exit(97);
  }
  all.fault = fault;
  all.children++;
  const pid_t child = fork();
  if (child == 0) {
    all.child = true;
    all.countdown = countdown;
    const struct rlimit limit = {CHILD_SECONDS, CHILD_SECONDS}; /* processor time: a hang ends by SIGXCPU */
    setrlimit(RLIMIT_CPU, &limit);
    dup2(all.messages, STDERR_FILENO);
    lseek(STDERR_FILENO, 0, SEEK_SET);
    return true;
  }
  if (child < 0 || waitpid(child, state, 0) != child) {
    _exit(97);
  }
  if (WIFEXITED(*state) && WEXITSTATUS(*state) == NOT_HIT) {
    all.children--;
  } else if (all.job == KILL) {
    judge_kill();
  } else {
    judge_end(*state);
  }
  return false;
}

static bool suits(enum fault fault, bool is_write) {
  switch (all.job) {
  case MEMORY:
    return fault == FAIL_ONCE || fault == FAIL_ON;
  case IO:
    return fault == FAIL_EIO || fault == FAIL_ENOSPC || fault == FAIL_EINTR ||
           (fault == FAIL_SHORT && is_write);
  case KILL:
    return fault == KILL_BEFORE || fault == KILL_AFTER;
  }
  return false;
}

/* From here on the outputs are written: children one after the other for the first, second, ... call from here. */
static bool snapshot(void) {
  all.writing = true;
  for (int fault = 0; fault < FAULTS; fault++) {
    for (long k = 1; suits((enum fault)fault, true); k++) {
      int state = 0;
      put_old();
      all.points++;
      if (one_child((enum fault)fault, k, &state)) {
        return true;
      }
      if (all.job == KILL) {
        temporaries(true);
      } else if (temporaries(true) > 0) {
        violation("temporary files left", 0);
      }
      if (WIFEXITED(state) && WEXITSTATUS(state) == NOT_HIT) {
        all.points--;
        break;
      }
    }
  }
  put_old();
  all.armed = false; /* the parent only has to finish */
  return false;
}

/* Comes before each counted call; true: let it fail with all.fault. */
static bool comes(const char *call, bool starts_writing, bool is_write) {
  if (!all.armed && !all.child) {
    return false;
  }
  all.call = call;
  if (all.child) {
    if (all.countdown > 0 && --all.countdown == 0) {
      all.hit = true;
      return true;
    }
    return all.hit && all.fault == FAIL_ON;
  }
  if (starts_writing) {
    return snapshot() && comes(call, false, is_write);
  }
  all.points++;
  const int keep = errno;
  for (int fault = 0; fault < FAULTS; fault++) {
    int state = 0;
    if (suits((enum fault)fault, is_write) && one_child((enum fault)fault, 1, &state)) {
      return comes(call, false, is_write);
    }
  }
  errno = keep;
  return false;
}

/* ---- the replaced calls ---- */

#ifdef LXG_WRAP
#define REPLACED(name) __wrap_##name
#define REAL(name) __real_##name
#else
#define REPLACED(name) name
#define REAL(name) __libc_##name
#endif
void *REAL(malloc)(size_t size);
void *REAL(calloc)(size_t count, size_t size);
void *REAL(realloc)(void *block, size_t size);
void REAL(free)(void *block);
void *REPLACED(malloc)(size_t size);
void *REPLACED(calloc)(size_t count, size_t size);
void *REPLACED(realloc)(void *block, size_t size);
void REPLACED(free)(void *block);

static bool no_memory(const char *call) {
  if (all.job == MEMORY && comes(call, false, false)) {
    errno = ENOMEM;
    return true;
  }
  return false;
}

void *REPLACED(malloc)(size_t size) {
  void *const block = no_memory("malloc") ? NULL : REAL(malloc)(size);
  all.live += block != NULL;
  return block;
}

void *REPLACED(calloc)(size_t count, size_t size) {
  void *const block = no_memory("calloc") ? NULL : REAL(calloc)(count, size);
  all.live += block != NULL;
  return block;
}

void *REPLACED(realloc)(void *block, size_t size) {
  void *const moved = no_memory("realloc") ? NULL : REAL(realloc)(block, size);
  all.live += block == NULL && moved != NULL;
  return moved;
}

void REPLACED(free)(void *block) {
  all.live -= block != NULL;
  REAL(free)(block);
}

#ifndef LXG_WRAP
/* The fault of an input or output call; true: it has happened and `*result` is what the caller sees. */
static bool io_fault(const char *call, bool starts_writing, bool is_write, long *result) {
  if (all.job == MEMORY) {
    if (starts_writing && all.armed && !all.child) {
      (void)snapshot();
    }
    return false;
  }
  if (!comes(call, starts_writing, is_write)) {
    return false;
  }
  static const int numbers[FAULTS] = {[FAIL_EIO] = EIO, [FAIL_ENOSPC] = ENOSPC, [FAIL_EINTR] = EINTR};
  if (all.fault == KILL_BEFORE) {
    kill(getpid(), SIGKILL);
  }
  if (numbers[all.fault] != 0) {
    errno = numbers[all.fault];
    *result = -1;
    return true;
  }
  return false;
}

/* Ends every call: the kill after it. */
static long done(long result) {
  if (all.child && all.hit && all.fault == KILL_AFTER) {
    kill(getpid(), SIGKILL);
  }
  return result;
}

static int open_at(int folder, const char *path, int flags, int mode) {
  long result = 0;
  const bool create = (flags & (O_CREAT | O_DIRECTORY)) != 0; /* the folder of an output is opened first */
  return io_fault("open", create, false, &result) ? (int)result
                                                  : (int)done(syscall(SYS_openat, folder, path, flags, mode));
}

static int mode_of(int flags, va_list list) {
  return flags & O_CREAT ? va_arg(list, int) : 0;
}

int open(const char *path, int flags, ...) {
  va_list list;
  va_start(list, flags);
  const int mode = mode_of(flags, list);
  va_end(list);
  return open_at(AT_FDCWD, path, flags, mode);
}

int openat(int folder, const char *path, int flags, ...) {
  va_list list;
  va_start(list, flags);
  const int mode = mode_of(flags, list);
  va_end(list);
  return open_at(folder, path, flags, mode);
}

ssize_t read(int file, void *bytes, size_t size) {
  long result = 0;
  const off_t place = all.armed && !all.child ? lseek(file, 0, SEEK_CUR) : -1;
  const bool fails = io_fault("read", false, false, &result);
  if (place >= 0 && !all.child) {
    lseek(file, place, SEEK_SET); /* children share the place in the file */
  }
  return fails ? (ssize_t)result : (ssize_t)done(syscall(SYS_read, file, bytes, size));
}

ssize_t write(int file, const void *bytes, size_t size) {
  long result = 0;
  if (io_fault("write", false, true, &result)) {
    return (ssize_t)result;
  }
  const bool shorter = all.child && all.hit && all.fault == FAIL_SHORT && all.countdown == 0 && size > 1;
  if (shorter) {
    all.fault = FAIL_ONCE;
  }
  return (ssize_t)done(syscall(SYS_write, file, bytes, shorter ? size / 2 : size));
}

int fsync(int file) {
  long result = 0;
  return io_fault("fsync", false, false, &result) ? (int)result : (int)done(syscall(SYS_fsync, file));
}

int close(int file) {
  long result = 0;
  if (io_fault("close", false, false, &result)) {
    syscall(SYS_close, file); /* as Linux does: the descriptor is gone whatever is returned */
    errno = all.fault == FAIL_EIO ? EIO : all.fault == FAIL_ENOSPC ? ENOSPC : EINTR;
    return -1;
  }
  return (int)done(syscall(SYS_close, file));
}

int renameat(int from, const char *old, int to, const char *new) {
  long result = 0;
  return io_fault("rename", false, false, &result) ? (int)result
                                                   : (int)done(syscall(SYS_renameat, from, old, to, new));
}
#endif

/* ---- the runs ---- */

static int command(void) {
  extern int optind;
  optind = 0;
  const int status = luxgale_main(all.argc, all.argv);
  fflush(stdout);
  return status;
}

static bool keep_new(struct output *output) {
  const int file = (int)syscall(SYS_openat, AT_FDCWD, output->path, O_RDONLY, 0);
  output->bytes = REAL(malloc)(MOST_BYTES);
  const long got =
      file < 0 || output->bytes == NULL ? -1 : syscall(SYS_read, file, output->bytes, MOST_BYTES);
  syscall(SYS_close, file);
  output->size = got > 0 ? (size_t)got : 0;
  return got > 0 && got < MOST_BYTES;
}

int main(int argc, char **argv) {
  static const char *const jobs[] = {"memory", "io", "kill"};
  if (argc < 4) {
    return 2;
  }
  while (all.job < KILL && strcmp(argv[1], jobs[all.job]) != 0) {
    all.job++;
  }
  char *const outputs = argv[2];
  all.argc = argc - 2;
  all.argv = argv + 2;
  all.argv[0] = "luxgale";
  if (strcmp(argv[1], "plain") == 0) {
    return command();
  }
  for (char *path = strtok(outputs, ","); path != NULL && all.outputs < MOST_OUTPUTS;
       path = strtok(NULL, ",")) {
    all.output[all.outputs++].path = path;
  }
  all.messages = memfd_create("messages", 0);
  const int nothing = open("/dev/null", O_WRONLY);
  const int result = dup(STDOUT_FILENO);
  if (all.messages < 0 || nothing < 0 || dup2(nothing, STDOUT_FILENO) < 0) {
    return 2;
  }
  const int errors = dup(STDERR_FILENO);
  dup2(nothing, STDERR_FILENO);
  const int first = command(); /* also lets stdio allocate its buffers */
  const long live = all.live;
  all.clean_status = command();
  all.clean_live = all.live - live;
  for (size_t i = 0; i < all.outputs; i++) {
    if (!keep_new(&all.output[i])) {
      dprintf(errors, "%s was not written\n", all.output[i].path);
      return 2;
    }
  }
  put_old();
  dup2(errors, STDERR_FILENO);
  const long before = all.live;
  all.armed = true;
  const int status = command();
  all.armed = false;
  if (all.child) {
    if (!all.hit) {
      _exit(NOT_HIT);
    }
    _exit(all.live - before > all.clean_live ? LEAKED : status);
  }
  dprintf(result,
          "{\"job\": \"%s\", \"points\": %ld, \"children\": %ld, \"refused\": %ld, \"handled\": %ld, "
          "\"violations\": %ld, \"status\": %d, \"live\": %ld}\n",
          jobs[all.job], all.points, all.children, all.refused, all.handled, all.violations, status,
          all.clean_live);
  return all.violations > 0 || status != first || status != all.clean_status;
}
