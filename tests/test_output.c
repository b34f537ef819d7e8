/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * test_output.c - all-or-nothing writing, bounded reading, checksums. The system's own behaviour (full device, missing
 * folder, dead processes) is the oracle.
 */
#include "helpers.h"
#include "luxgale/input.h"
#include "luxgale/output.h"

#include <dirent.h>
#include <fcntl.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

static char folder[] = "/tmp/luxgale-output-XXXXXX";

static void set_up(void) {
  strcpy(folder, "/tmp/luxgale-output-XXXXXX");
  ck_assert_ptr_nonnull(mkdtemp(folder));
}

static void tear_down(void) {
  char command[100];
  snprintf(command, sizeof command, "rm -rf %s", folder);
  ck_assert_int_eq(system(command), 0);
}

static const char *in_folder(const char *name) {
  static char path[512];
  snprintf(path, sizeof path, "%s/%s", folder, name);
  return path;
}

static void check_content(const char *path, const char *expected) {
  struct lxg_buffer bytes = {0};
  struct lxg_error error = {0};
  assert_status(lxg_input_read(path, 1000, &bytes, NULL, &error), LXG_OK, &error);
  ck_assert_uint_eq(bytes.size, strlen(expected));
  ck_assert(bytes.size == 0 || memcmp(bytes.data, expected, bytes.size) == 0);
  lxg_buffer_free(&bytes);
}

static int entries(void) {
  DIR *const handle = opendir(folder);
  ck_assert_ptr_nonnull(handle);
  int count = -2;
  while (readdir(handle) != NULL) {
    count++;
  }
  closedir(handle);
  return count;
}

START_TEST(writes_and_replaces) {
  struct lxg_error error = {0};
  const char *const path = in_folder("name with \"quotes\" and\nnewline.yaml");
  assert_status(lxg_output_write(path, "old", 3, &error), LXG_OK, &error);
  check_content(path, "old");
  ck_assert_int_eq(chmod(path, 0640), 0);
  assert_status(lxg_output_write(path, "newer", 5, &error), LXG_OK, &error);
  check_content(path, "newer");
  struct stat state;
  ck_assert_int_eq(stat(path, &state), 0);
  ck_assert_uint_eq(state.st_mode & 0777, 0640);
  assert_status(lxg_output_write(path, "", 0, &error), LXG_OK, &error);
  check_content(path, "");
  ck_assert_int_eq(entries(), 1);
}
END_TEST

START_TEST(longest_name_and_relative_path) {
  struct lxg_error error = {0};
  char name[256];
  memset(name, 'n', 255);
  name[255] = '\0';
  assert_status(lxg_output_write(in_folder(name), "long", 4, &error), LXG_OK, &error);
  check_content(in_folder(name), "long");
  const int home = open(".", O_RDONLY | O_DIRECTORY);
  ck_assert_int_eq(chdir(folder), 0);
  const enum lxg_status status = lxg_output_write("-x", "dash", 4, &error);
  ck_assert_int_eq(fchdir(home), 0);
  close(home);
  ck_assert_int_eq(status, LXG_OK);
  check_content(in_folder("-x"), "dash");
}
END_TEST

START_TEST(refused_targets) {
  struct lxg_error error = {0};
  ck_assert_int_eq(lxg_output_write(in_folder("no/such/folder"), "x", 1, &error), LXG_IO);
  ck_assert_str_eq(error.code, "write-open");
  ck_assert_ptr_nonnull(strstr(error.line[0], "No such file or directory"));
  ck_assert_int_eq(lxg_output_write(folder, "x", 1, &error), LXG_IO);
  ck_assert_str_eq(error.code, "write-rename");
  ck_assert_int_eq(lxg_output_write(in_folder(""), "x", 1, &error), LXG_IO);
  ck_assert_int_eq(lxg_output_write("/dev/full", "x", 1, &error), LXG_IO);
  ck_assert_str_eq(error.code, "write-failed");
  ck_assert_ptr_nonnull(strstr(error.line[0], "/dev/full: error"));
  struct stat state;
  ck_assert(stat("/dev/full", &state) == 0 && S_ISCHR(state.st_mode)); /* not replaced by a file */
  ck_assert_int_eq(entries(), 0);
}
END_TEST

/* A file size limit stops the write in the middle: the old file stays, the new one goes. */
START_TEST(failed_write_leaves_the_old_file) {
  struct lxg_error error = {0};
  const char *const path = in_folder("table.ecsv");
  assert_status(lxg_output_write(path, "old", 3, &error), LXG_OK, &error);
  static char big[100000];
  memset(big, 'b', sizeof big);
  signal(SIGXFSZ, SIG_IGN);
  const struct rlimit little = {4096, RLIM_INFINITY}, none = {RLIM_INFINITY, RLIM_INFINITY};
  ck_assert_int_eq(setrlimit(RLIMIT_FSIZE, &little), 0);
  const enum lxg_status status = lxg_output_write(path, big, sizeof big, &error);
  ck_assert_int_eq(setrlimit(RLIMIT_FSIZE, &none), 0);
  ck_assert_int_eq(status, LXG_IO);
  ck_assert_str_eq(error.code, "write-failed");
  check_content(path, "old");
  ck_assert_int_eq(entries(), 1);
}
END_TEST

START_TEST(links_are_replaced_not_followed) {
  struct lxg_error error = {0};
  char target[512];
  strcpy(target, in_folder("elsewhere"));
  assert_status(lxg_output_write(target, "keep", 4, &error), LXG_OK, &error);
  const char *const path = in_folder("link");
  ck_assert_int_eq(symlink(target, path), 0);
  assert_status(lxg_output_write(path, "mine", 4, &error), LXG_OK, &error);
  check_content(path, "mine");
  check_content(target, "keep");
  unlink(path);
  ck_assert_int_eq(symlink("nowhere", path), 0);
  assert_status(lxg_output_write(path, "mine", 4, &error), LXG_OK, &error);
  check_content(path, "mine");
}
END_TEST

/* The name of the temporary file: that of a process which is gone is cleared away, others are left alone. */
START_TEST(stale_files_are_removed) {
  struct lxg_error error = {0};
  char command[700], name[256] = "";
  const char *const path = in_folder("report.yaml");
  signal(SIGXFSZ, SIG_DFL);
  const pid_t child = fork();
  if (child == 0) { /* dies in the middle of its write */
    const struct rlimit little = {10, 10}, no_core = {0, 0};
    setrlimit(RLIMIT_CORE, &no_core);
    setrlimit(RLIMIT_FSIZE, &little);
    lxg_output_write(path, "more than ten bytes", 19, NULL);
    _exit(0);
  }
  int outcome = 0;
  ck_assert_int_eq(waitpid(child, &outcome, 0), child);
  ck_assert(WIFSIGNALED(outcome));
  ck_assert_int_eq(entries(), 1);
  DIR *const handle = opendir(folder);
  for (const struct dirent *entry = readdir(handle); entry != NULL; entry = readdir(handle)) {
    if (strncmp(entry->d_name, ".luxgale-", 9) == 0) {
      strcpy(name, entry->d_name);
    }
  }
  closedir(handle);
  ck_assert_ptr_nonnull(strstr(name, ".tmp"));
  snprintf(command, sizeof command, "cp %s/%s %s/.luxgale-00000000-00000000-%ld-0.tmp", folder, name, folder,
           (long)child);
  ck_assert_int_eq(system(command), 0);
  assert_status(lxg_output_write(path, "whole", 5, &error), LXG_OK, &error);
  ck_assert_int_ne(access(in_folder(name), F_OK), 0);
  ck_assert_int_eq(entries(), 2); /* the report and the file of another target */
}
END_TEST

START_TEST(standard_output) {
  struct lxg_error error = {0};
  char path[512];
  strcpy(path, in_folder("stdout"));
  fflush(stdout);
  const int saved = dup(STDOUT_FILENO);
  int file = open(path, O_WRONLY | O_CREAT, 0600);
  dup2(file, STDOUT_FILENO);
  close(file);
  printf("first ");
  const enum lxg_status status = lxg_output_write("-", "second", 6, &error);
  file = open("/dev/full", O_WRONLY);
  dup2(file, STDOUT_FILENO);
  close(file);
  struct lxg_error full = {0};
  const enum lxg_status on_full = lxg_output_write("-", "x", 1, &full);
  close(STDOUT_FILENO);
  const enum lxg_status on_closed = lxg_output_write("-", "x", 1, &full);
  dup2(saved, STDOUT_FILENO);
  close(saved);
  ck_assert_int_eq(status, LXG_OK);
  check_content(path, "first second");
  ck_assert_int_eq(on_full, LXG_IO);
  ck_assert_int_eq(on_closed, LXG_IO);
  ck_assert_ptr_nonnull(strstr(full.line[0], "<stdout>"));
}
END_TEST

START_TEST(bounded_reading) {
  struct lxg_error error = {0};
  struct lxg_buffer bytes = {0};
  ck_assert_int_eq(lxg_input_read(in_folder("absent"), 100, &bytes, NULL, &error), LXG_IO);
  ck_assert_str_eq(error.code, "read-open");
  ck_assert_int_eq(lxg_input_read(folder, 100, &bytes, NULL, &error), LXG_IO);
  ck_assert_str_eq(error.code, "read-failed");
  ck_assert_int_eq(lxg_input_read("/dev/zero", 1000000, &bytes, NULL, &error), LXG_LIMIT);
  ck_assert_str_eq(error.code, "read-size");
  ck_assert_uint_eq(bytes.size, 0);
  assert_status(lxg_output_write(in_folder("ten"), "0123456789", 10, &error), LXG_OK, &error);
  assert_status(lxg_input_read(in_folder("ten"), 10, &bytes, NULL, &error), LXG_OK, &error);
  ck_assert_int_eq(lxg_input_read(in_folder("ten"), 9, &bytes, NULL, &error), LXG_LIMIT);
  ck_assert_str_eq(bytes.data, "0123456789");
  lxg_buffer_free(&bytes);
}
END_TEST

/* Messages and digests of the examples that NIST publishes with FIPS 180 (one block, two blocks, a million a), and of
 * the empty message. */
static const struct {
  const char *message, *digest;
} vectors[] = {{"abc", "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"},
               {"abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq",
                "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1"},
               {"", "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855"}};

START_TEST(checksum_vectors) {
  char hex[LXG_CHECKSUM_SIZE];
  struct lxg_checksum checksum;
  lxg_checksum_init(&checksum);
  lxg_checksum_update(&checksum, vectors[_i].message, strlen(vectors[_i].message));
  lxg_checksum_finish(&checksum, hex);
  ck_assert_str_eq(hex, vectors[_i].digest);
}
END_TEST

START_TEST(checksum_of_a_file) {
  static char million[1000000];
  memset(million, 'a', sizeof million);
  struct lxg_error error = {0};
  char hex[LXG_CHECKSUM_SIZE];
  assert_status(lxg_output_write(in_folder("million"), million, sizeof million, &error), LXG_OK, &error);
  assert_status(lxg_input_checksum(in_folder("million"), hex, &error), LXG_OK, &error);
  ck_assert_str_eq(hex, "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0");
}
END_TEST

Suite *suite_output(void);
Suite *suite_output(void) {
  Suite *suite = suite_create("output");
  TCase *tests = tcase_create("output");
  tcase_add_checked_fixture(tests, set_up, tear_down);
  tcase_set_timeout(tests, 30);
  tcase_add_test(tests, writes_and_replaces);
  tcase_add_test(tests, longest_name_and_relative_path);
  tcase_add_test(tests, refused_targets);
  tcase_add_test(tests, failed_write_leaves_the_old_file);
  tcase_add_test(tests, links_are_replaced_not_followed);
  tcase_add_test(tests, stale_files_are_removed);
  tcase_add_test(tests, standard_output);
  tcase_add_test(tests, bounded_reading);
  tcase_add_loop_test(tests, checksum_vectors, 0, sizeof vectors / sizeof vectors[0]);
  tcase_add_test(tests, checksum_of_a_file);
  suite_add_tcase(suite, tests);
  return suite;
}
