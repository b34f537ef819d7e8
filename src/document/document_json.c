/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * document_json.c - strict JSON (RFC 8259) with positions.
 *
 * Own reader, because every node must know its line and column and every number must keep its digits; the grammar is
 * small. Refused beyond the grammar: duplicate keys, the character zero, halves of surrogate pairs. No recursion: the
 * open collections are the parents of the current node.
 */
#include "document/document_internal.h"

#include <stdlib.h>
#include <string.h>

struct cursor {
  struct lxg_document_builder *builder;
  const char *at, *end;
  struct lxg_position position;
  struct lxg_buffer text; /* of the string being read */
};

static enum lxg_status bad(const struct cursor *cursor, struct lxg_error *error, const char *what) {
  return lxg_document_fail(cursor->builder->source, cursor->position, error, LXG_INPUT, "document-syntax",
                           "not readable as JSON: %s", what);
}

static void step(struct cursor *cursor) {
  const char byte = *cursor->at++;
  if (byte == '\n') {
    cursor->position.line++;
    cursor->position.column = 1;
  } else if (((unsigned char)byte & 0xC0) != 0x80) {
    cursor->position.column++;
  }
}

/* The byte at hand; zero at the end (zero bytes were refused before). */
static char peek(const struct cursor *cursor) {
  return cursor->at < cursor->end ? *cursor->at : '\0';
}

static void skip_blanks(struct cursor *cursor) {
  while (cursor->at < cursor->end && memchr(" \t\r\n", *cursor->at, 4) != NULL) {
    step(cursor);
  }
}

/* Four hexadecimal digits, or -1. */
static long take_code(struct cursor *cursor) {
  long code = 0;
  for (int i = 0; i < 4; i++) {
    const char c = peek(cursor);
    const char *const digits = "0123456789abcdef";
    const char lower = c >= 'A' && c <= 'F' ? (char)(c + 32) : c;
    const char *const found = c != '\0' ? strchr(digits, lower) : NULL;
    if (found == NULL) {
      return -1;
    }
    code = code * 16 + (found - digits);
    step(cursor);
  }
  return code;
}

static void append_code(struct lxg_buffer *text, unsigned long code) {
  if (code < 0x80) {
    lxg_buffer_byte(text, (char)code);
  } else if (code < 0x800) {
    lxg_buffer_byte(text, (char)(0xC0 | code >> 6));
    lxg_buffer_byte(text, (char)(0x80 | (code & 0x3F)));
  } else if (code < 0x10000) {
    lxg_buffer_byte(text, (char)(0xE0 | code >> 12));
    lxg_buffer_byte(text, (char)(0x80 | (code >> 6 & 0x3F)));
    lxg_buffer_byte(text, (char)(0x80 | (code & 0x3F)));
  } else {
    lxg_buffer_byte(text, (char)(0xF0 | code >> 18));
    lxg_buffer_byte(text, (char)(0x80 | (code >> 12 & 0x3F)));
    lxg_buffer_byte(text, (char)(0x80 | (code >> 6 & 0x3F)));
    lxg_buffer_byte(text, (char)(0x80 | (code & 0x3F)));
  }
}

/* Behind "\u". */
static enum lxg_status take_unicode(struct cursor *cursor, struct lxg_error *error) {
  long code = take_code(cursor);
  if (code >= 0xD800 && code < 0xDC00 && peek(cursor) == '\\') {
    step(cursor);
    if (peek(cursor) != 'u') {
      return bad(cursor, error, "half of a surrogate pair");
    }
    step(cursor);
    const long low = take_code(cursor);
    if (low < 0xDC00 || low > 0xDFFF) {
      return bad(cursor, error, "half of a surrogate pair");
    }
    code = 0x10000 + (code - 0xD800) * 0x400 + (low - 0xDC00);
  }
  if (code <= 0 || (code >= 0xD800 && code <= 0xDFFF)) {
    return bad(cursor, error, "\\u needs four hexadecimal digits of a character other than zero");
  }
  append_code(&cursor->text, (unsigned long)code);
  return LXG_OK;
}

/* Behind "\". */
static enum lxg_status take_escape(struct cursor *cursor, struct lxg_error *error) {
  static const char names[] = "\"\\/bfnrt";
  static const char values[] = "\"\\/\b\f\n\r\t";
  const char c = peek(cursor);
  if (c == 'u') {
    step(cursor);
    return take_unicode(cursor, error);
  }
  const char *const found = c != '\0' ? strchr(names, c) : NULL;
  if (found == NULL) {
    return bad(cursor, error, "unknown escape");
  }
  step(cursor);
  lxg_buffer_byte(&cursor->text, values[found - names]);
  return LXG_OK;
}

/* A string into cursor->text. */
static enum lxg_status take_string(struct cursor *cursor, struct lxg_error *error) {
  cursor->text.size = 0;
  step(cursor);
  while (peek(cursor) != '"') {
    if (cursor->at >= cursor->end) {
      return bad(cursor, error, "a string without closing quote");
    }
    if ((unsigned char)peek(cursor) < 0x20) {
      return bad(cursor, error, "a control character inside a string");
    }
    if (peek(cursor) == '\\') {
      step(cursor);
      const enum lxg_status status = take_escape(cursor, error);
      if (status != LXG_OK) {
        return status;
      }
      continue;
    }
    lxg_buffer_byte(&cursor->text, peek(cursor));
    step(cursor);
  }
  step(cursor);
  return lxg_buffer_status(&cursor->text, error);
}

static bool is_digit(char c) {
  return c >= '0' && c <= '9';
}

/* Length of a number by the grammar of RFC 8259, section 6; 0 if there is none. */
static size_t number_length(const char *at, const char *end) {
  const char *p = at;
  p += p < end && *p == '-' ? 1 : 0;
  const char *const whole = p;
  while (p < end && is_digit(*p)) {
    p++;
  }
  if (p == whole || (*whole == '0' && p - whole > 1)) {
    return 0;
  }
  if (p < end && *p == '.') {
    const char *const fraction = ++p;
    while (p < end && is_digit(*p)) {
      p++;
    }
    if (p == fraction) {
      return 0;
    }
  }
  if (p < end && (*p == 'e' || *p == 'E')) {
    p++;
    p += p < end && (*p == '+' || *p == '-') ? 1 : 0;
    const char *const exponent = p;
    while (p < end && is_digit(*p)) {
      p++;
    }
    if (p == exponent) {
      return 0;
    }
  }
  return (size_t)(p - at);
}

static enum lxg_status take_word(struct cursor *cursor, struct lxg_error *error) {
  static const char *const words[] = {"true", "false", "null"};
  const struct lxg_position position = cursor->position;
  const size_t left = (size_t)(cursor->end - cursor->at);
  size_t size = number_length(cursor->at, cursor->end);
  for (size_t i = 0; i < sizeof words / sizeof words[0]; i++) {
    const size_t length = strlen(words[i]);
    if (left >= length && memcmp(cursor->at, words[i], length) == 0) {
      size = length;
    }
  }
  if (size == 0) {
    return bad(cursor, error,
               cursor->at >= cursor->end
                   ? "the text ends where a value is due"
                   : "a value is due here: {, [, a string in double quotes, a number, true, false or null");
  }
  const char *const text = cursor->at;
  for (size_t i = 0; i < size; i++) {
    step(cursor);
  }
  return lxg_builder_scalar(cursor->builder, text, size, false, position, error);
}

/* "key" and the colon. */
static enum lxg_status take_key(struct cursor *cursor, struct lxg_error *error) {
  skip_blanks(cursor);
  const struct lxg_position position = cursor->position;
  if (peek(cursor) != '"') {
    return bad(cursor, error, "a key in double quotes is due here");
  }
  enum lxg_status status = take_string(cursor, error);
  if (status == LXG_OK) {
    status = lxg_builder_key(cursor->builder, cursor->text.size > 0 ? cursor->text.data : "",
                             cursor->text.size, position, error);
  }
  if (status != LXG_OK) {
    return status;
  }
  skip_blanks(cursor);
  if (peek(cursor) != ':') {
    return bad(cursor, error, "a colon is due behind the key");
  }
  step(cursor);
  return LXG_OK;
}

/* One value, or the opening of a collection; `*open` tells that a first child (or the end) follows. */
static enum lxg_status take_value(struct cursor *cursor, bool *open, struct lxg_error *error) {
  skip_blanks(cursor);
  const struct lxg_position position = cursor->position;
  const char c = peek(cursor);
  *open = c == '{' || c == '[';
  if (*open) {
    step(cursor);
    return lxg_builder_open(cursor->builder, c == '{' ? LXG_NODE_MAPPING : LXG_NODE_SEQUENCE, position,
                            error);
  }
  if (c == '"') {
    const enum lxg_status status = take_string(cursor, error);
    return status != LXG_OK
               ? status
               : lxg_builder_scalar(cursor->builder, cursor->text.size > 0 ? cursor->text.data : "",
                                    cursor->text.size, true, position, error);
  }
  return take_word(cursor, error);
}

/* What follows a value: closings, then a comma (or nothing more). `*more` tells that another value is due. */
static enum lxg_status take_separator(struct cursor *cursor, bool open, bool *more, struct lxg_error *error) {
  const struct lxg_document_builder *const builder = cursor->builder;
  *more = true;
  for (;;) {
    skip_blanks(cursor);
    if (builder->parent == NULL) {
      *more = false;
      return cursor->at == cursor->end ? LXG_OK : bad(cursor, error, "something follows the document");
    }
    const bool mapping = builder->parent->kind == LXG_NODE_MAPPING;
    const char c = peek(cursor);
    if (c == (mapping ? '}' : ']')) {
      step(cursor);
      const enum lxg_status status = lxg_builder_close(cursor->builder, error);
      if (status != LXG_OK) {
        return status;
      }
      open = false;
      continue;
    }
    if (!open) {
      if (c != ',') {
        return bad(cursor, error, mapping ? "a comma or } is due here" : "a comma or ] is due here");
      }
      step(cursor);
    }
    return mapping ? take_key(cursor, error) : LXG_OK;
  }
}

enum lxg_status lxg_document_from_json(struct lxg_document *document,
                                       const struct lxg_document_source *source, struct lxg_node **root,
                                       struct lxg_error *error) {
  struct lxg_document_builder builder = {.document = document, .source = source};
  struct cursor cursor = {
      .builder = &builder, .at = source->bytes, .end = source->bytes + source->size, .position = {1, 1}};
  enum lxg_status status = LXG_OK;
  for (bool more = true; more && status == LXG_OK;) {
    bool open = false;
    status = take_value(&cursor, &open, error);
    if (status == LXG_OK) {
      status = take_separator(&cursor, open, &more, error);
    }
  }
  lxg_buffer_free(&cursor.text);
  *root = status == LXG_OK ? builder.root : NULL;
  return status;
}
