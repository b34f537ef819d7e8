/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * buffer.c - the growable byte buffer and the UTF-8 check (see text.h).
 */
#include "luxgale/memory.h"
#include "luxgale/text.h"

#include <stdarg.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

/* Room for `size` more bytes and the terminator. */
static bool reserve(struct lxg_buffer *buffer, size_t size) {
  if (buffer->failed || size > SIZE_MAX / 2 - buffer->size - 1) {
    buffer->failed = true;
    return false;
  }
  const size_t needed = buffer->size + size + 1;
  if (needed <= buffer->capacity) {
    return true;
  }
  const size_t grown = buffer->capacity + buffer->capacity / 2 + 64;
  const size_t capacity = grown > needed ? grown : needed;
  char *data = lxg_realloc(buffer->data, capacity, 1);
  if (data == NULL) {
    buffer->failed = true;
    return false;
  }
  buffer->data = data;
  buffer->capacity = capacity;
  return true;
}

void lxg_buffer_append(struct lxg_buffer *buffer, const void *bytes, size_t size) {
  if (reserve(buffer, size)) {
    if (size > 0) {
      memcpy(buffer->data + buffer->size, bytes, size);
    }
    buffer->size += size;
    buffer->data[buffer->size] = '\0';
  }
}

void lxg_buffer_text(struct lxg_buffer *buffer, const char *text) {
  lxg_buffer_append(buffer, text, strlen(text));
}

void lxg_buffer_byte(struct lxg_buffer *buffer, char byte) {
  lxg_buffer_append(buffer, &byte, 1);
}

void lxg_buffer_number(struct lxg_buffer *buffer, double value) {
  char text[LXG_TEXT_NUMBER_SIZE];
  const size_t size = lxg_text_format_number(value, text);
  lxg_buffer_append(buffer, text, size);
}

void lxg_buffer_format(struct lxg_buffer *buffer, const char *format, ...) {
  va_list arguments;
  va_start(arguments, format);
  va_list again;
  va_copy(again, arguments);
  const int size = vsnprintf(NULL, 0, format, arguments);
  va_end(arguments);
  if (size < 0) {
    buffer->failed = true;
  } else if (reserve(buffer, (size_t)size)) {
    vsnprintf(buffer->data + buffer->size, (size_t)size + 1, format, again);
    buffer->size += (size_t)size;
  }
  va_end(again);
}

enum lxg_status lxg_buffer_status(const struct lxg_buffer *buffer, struct lxg_error *error) {
  return buffer->failed ? lxg_error_set(error, LXG_MEMORY, "memory", "out of memory after %zu bytes of text",
                                        buffer->size)
                        : LXG_OK;
}

void lxg_buffer_free(struct lxg_buffer *buffer) {
  if (buffer != NULL) {
    lxg_free(buffer->data);
    *buffer = (struct lxg_buffer){0};
  }
}

size_t lxg_text_utf8(const char *text, size_t size) {
  const unsigned char *const byte = (const unsigned char *)text;
  if (size == 0) {
    return 0;
  }
  if (byte[0] < 0x80) {
    return 1;
  }
  const size_t length = byte[0] >= 0xF0 ? 4 : (byte[0] >= 0xE0 ? 3 : 2);
  if (byte[0] < 0xC2 || byte[0] > 0xF4 || size < length) {
    return 0;
  }
  for (size_t i = 1; i < length; i++) {
    if ((byte[i] & 0xC0) != 0x80) {
      return 0;
    }
  }
  const bool overlong = (byte[0] == 0xE0 && byte[1] < 0xA0) || (byte[0] == 0xF0 && byte[1] < 0x90);
  const bool surrogate = byte[0] == 0xED && byte[1] > 0x9F;
  const bool beyond = byte[0] == 0xF4 && byte[1] > 0x8F;
  return overlong || surrogate || beyond ? 0 : length;
}
