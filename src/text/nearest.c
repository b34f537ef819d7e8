/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * nearest.c - the known name nearest to a mistyped one (see text.h).
 *
 * Distance: the fewest insertions, deletions, replacements and swaps of neighbours that turn one word into the other, no
 * letter being touched twice (optimal string alignment; Damerau 1964, Commun. ACM 7, 171).
 */
#include "luxgale/text.h"

#include <ctype.h>
#include <string.h>

enum { LONGEST = 64 }; /* longer words are not compared */

static size_t smaller(size_t a, size_t b) {
  return a < b ? a : b;
}

static bool same_letter(char a, char b) {
  return tolower((unsigned char)a) == tolower((unsigned char)b);
}

static size_t distance(const char *a, size_t a_size, const char *b, size_t b_size) {
  size_t rows[3][LONGEST + 1];
  for (size_t j = 0; j <= b_size; j++) {
    rows[0][j] = j;
  }
  for (size_t i = 1; i <= a_size; i++) {
    size_t *const now = rows[i % 3];
    const size_t *const above = rows[(i + 2) % 3];
    const size_t *const higher = rows[(i + 1) % 3];
    now[0] = i;
    for (size_t j = 1; j <= b_size; j++) {
      const size_t replace = above[j - 1] + (same_letter(a[i - 1], b[j - 1]) ? 0 : 1);
      now[j] = smaller(replace, smaller(above[j], now[j - 1]) + 1);
      if (i > 1 && j > 1 && same_letter(a[i - 1], b[j - 2]) && same_letter(a[i - 2], b[j - 1])) {
        now[j] = smaller(now[j], higher[j - 2] + 1);
      }
    }
  }
  return rows[a_size % 3][b_size];
}

const char *lxg_text_nearest(const char *word, const char *const *names, size_t count) {
  const size_t size = strlen(word);
  const char *nearest = NULL;
  size_t least = LONGEST;
  for (size_t i = 0; i < count && size > 0 && size <= LONGEST; i++) {
    const size_t name_size = strlen(names[i]);
    if (name_size == 0 || name_size > LONGEST) {
      continue;
    }
    const size_t longer = size > name_size ? size : name_size;
    const size_t allowed = (longer + 2) / 3;
    const size_t edits = distance(word, size, names[i], name_size);
    if (edits <= allowed && edits < longer && edits < least) {
      least = edits;
      nearest = names[i];
    }
  }
  return nearest;
}
