/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * output.h - writing a file so that a reader ever sees the old one or the whole new one.
 *
 * The bytes go to a new file beside the target (O_EXCL, O_NOFOLLOW), are flushed to the disk, renamed over the
 * target, and the folder is flushed too. Every step is checked; on failure the new file is removed and the old target
 * is as it was. Temporary names are `.luxgale-TARGET-HOST-PID-N.tmp` with TARGET and HOST as hashes; those that
 * processes of this host left behind for the same target are removed by the next write. A target that is a device or a
 * pipe is written directly; a symbolic link is replaced, not followed.
 */
#ifndef LUXGALE_OUTPUT_H
#define LUXGALE_OUTPUT_H

#include "luxgale/status.h"

#include <stddef.h>

/* Writes `size` bytes to `path`; `-` is standard output. LXG_IO ("write-open", "write-failed", "write-rename") names the
 * file and the system's reason. The process must not rely on SIGPIPE: the program ignores it. */
enum lxg_status lxg_output_write(const char *path, const void *bytes, size_t size, struct lxg_error *error);

#endif
