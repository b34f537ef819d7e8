# SPDX-License-Identifier: GPL-3.0-or-later
"""luxgale from Python: one command on one case, results as a dictionary and NumPy arrays. Needs the installed shared library.

    import luxgale
    result = luxgale.run("outburst", "examples/quickstart.yaml", {"star.mass": "1.1 Msun"})
    result.report["ejecta"]["mass_msun"]
    result.table("epochs")["mass_loss_rate_msun_yr"]      # a NumPy array
    result.unit("epochs", "mass_loss_rate_msun_yr")       # "solMass / yr", as astropy spells it

LUXGALE_LIBRARY names the shared library where the loader does not find it.
"""
import ctypes
import ctypes.util
import json
import os

import numpy as np

_LINES, _LINE, _CODE = 8, 320, 48  # of struct lxg_error, status.h


class _Error(ctypes.Structure):
    _fields_ = [("status", ctypes.c_int), ("code", ctypes.c_char * _CODE), ("count", ctypes.c_size_t),
                ("line", (ctypes.c_char * _LINE) * _LINES)]


class Failure(Exception):
    """The library refused the input or could not finish; `code` is stable, the text is for people."""

    def __init__(self, status, code, text):
        super().__init__(text)
        self.status, self.code = status, code


def _load():
    library = ctypes.CDLL(os.environ.get("LUXGALE_LIBRARY") or ctypes.util.find_library("luxgale") or "libluxgale.so.0")
    ctypes.CDLL(ctypes.util.find_library("gsl")).gsl_set_error_handler_off()  # else GSL ends the process on an error
    pointer, text, size = ctypes.c_void_p, ctypes.c_char_p, ctypes.c_size_t
    for name, result, arguments in [
            ("create", ctypes.c_int, [text, text, ctypes.POINTER(text), size, ctypes.POINTER(pointer), ctypes.POINTER(_Error)]),
            ("destroy", None, [pointer]), ("full", ctypes.c_int, [pointer]), ("report", text, [pointer]),
            ("table", text, [pointer, size]), ("column_name", text, [pointer, text, size]),
            ("column_unit", text, [pointer, text, size]),
            ("column", ctypes.POINTER(ctypes.c_double), [pointer, text, text, ctypes.POINTER(size)]),
            ("text", text, [pointer, text, text, size])]:
        function = getattr(library, "lxg_answer_" + name)
        function.restype, function.argtypes = result, arguments
    return library


_library = None


class Result:
    """What a command gave. `report` is the report as a dictionary; `full` is False where the physics gave no (full) answer."""

    def __init__(self, answer):
        self.full = bool(_library.lxg_answer_full(answer))
        self.report = json.loads(_library.lxg_answer_report(answer))
        self._tables, self._units = {}, {}
        index = 0
        while (name := _library.lxg_answer_table(answer, index)) is not None:
            self._read(answer, name)
            index += 1

    def _read(self, answer, name):
        columns, units, rows, index = {}, {}, ctypes.c_size_t(), 0
        while (column := _library.lxg_answer_column_name(answer, name, index)) is not None:
            numbers = _library.lxg_answer_column(answer, name, column, ctypes.byref(rows))
            if numbers:
                values = np.ctypeslib.as_array(numbers, shape=(rows.value,)).copy()
            else:
                values = np.array([_library.lxg_answer_text(answer, name, column, row).decode() for row in range(rows.value)])
            columns[column.decode()] = values
            units[column.decode()] = _library.lxg_answer_column_unit(answer, name, index).decode()
            index += 1
        self._tables[name.decode()], self._units[name.decode()] = columns, units

    @property
    def tables(self):
        """Names of the tables there are."""
        return list(self._tables)

    def table(self, name):
        """Columns of a table: a dictionary of NumPy arrays, NaN where a number is missing."""
        return self._tables[name]

    def unit(self, table, column):
        """Unit of a column, "" for a pure number or a text."""
        return self._units[table][column]


def run(command, case, overrides=None):
    """Runs "star", "wind", "family" or "outburst" on a case file; `overrides` maps paths of keys to values. Failure if refused."""
    global _library
    if _library is None:
        _library = _load()
    words = [f"{path}={value}".encode() for path, value in (overrides or {}).items()]
    array = (ctypes.c_char_p * max(1, len(words)))(*words)
    answer, error = ctypes.c_void_p(), _Error()
    status = _library.lxg_answer_create(command.encode(), os.fsencode(case), array, len(words), ctypes.byref(answer), ctypes.byref(error))
    if status != 0:
        lines = [bytes(error.line[i]).split(b"\0")[0].decode() for i in range(error.count)]
        raise Failure(status, error.code.decode(), "\n  while ".join(lines))
    try:
        return Result(answer)
    finally:
        _library.lxg_answer_destroy(answer)
