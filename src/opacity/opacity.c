/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * opacity.c - creation of an opacity and the one door through which it is read (see opacity.h).
 */
#include "luxgale/opacity.h"

#include "luxgale/constants.h"
#include "luxgale/memory.h"
#include "opacity/opacity_internal.h"

#include <math.h>
#include <string.h>

/* Limits of opacity.h as natural logarithms. */
static const double ln_least_t = 2.302585092994046;     /* ln 10 */
static const double ln_most_t = 27.631021115928547;     /* ln 1e12 */
static const double ln_least_rho = -92.103403719761840; /* ln 1e-40 */
static const double ln_most_rho = 27.631021115928547;   /* ln 1e12 */

static const char *const source_names[LXG_OPACITY_SOURCES] = {
    "scattering", "free_free", "bound_free", "h_minus", "hydrogen", "helium", "iron", "deep"};

static const char *const formula_names[] = {"kramers", "scattering", "reference"};

const char *lxg_opacity_source_name(enum lxg_opacity_source source) {
  return (size_t)source < LXG_OPACITY_SOURCES ? source_names[source] : "unknown";
}

enum lxg_status lxg_opacity_source_find(const char *name, unsigned *bit, struct lxg_error *error) {
  for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
    if (strcmp(name, source_names[i]) == 0) {
      *bit = LXG_OPACITY_BIT(i);
      return LXG_OK;
    }
  }
  return lxg_error_set(
      error, LXG_INPUT, "opacity-source",
      "omit = %.40s: the sources are scattering, free_free, bound_free, h_minus, hydrogen, helium, "
      "iron, deep",
      name);
}

enum lxg_status lxg_opacity_formula_find(const char *name, enum lxg_opacity_formula *formula,
                                         struct lxg_error *error) {
  for (size_t i = 0; i < sizeof formula_names / sizeof formula_names[0]; i++) {
    if (strcmp(name, formula_names[i]) == 0) {
      *formula = (enum lxg_opacity_formula)i;
      return LXG_OK;
    }
  }
  return lxg_error_set(error, LXG_INPUT, "opacity-formula",
                       "formula = %.40s: the formulas are kramers, scattering, reference", name);
}

/* Something must be left to absorb or scatter: H-minus alone limits, it carries nothing. */
static enum lxg_status check_omit(enum lxg_opacity_formula formula, unsigned omit,
                                  const struct kramers_law *law, struct lxg_error *error) {
  if (omit == 0) {
    return LXG_OK;
  }
  if (formula != LXG_OPACITY_KRAMERS) {
    return lxg_error_set(error, LXG_INPUT, "opacity-omit",
                         "omit: only the formula kramers is made of sources that can be left out");
  }
  if ((omit & ~(LXG_OPACITY_BIT(LXG_OPACITY_SOURCES) - 1u)) != 0) {
    return lxg_error_set(error, LXG_INPUT, "opacity-omit", "omit = 0x%x: there are %d sources", omit,
                         LXG_OPACITY_SOURCES);
  }
  if (law->hydrogen_electrons + law->other_electrons == 0.0 && !law->present[KRAMERS_FREE_FREE] &&
      !law->present[KRAMERS_BOUND_FREE]) {
    return lxg_error_set(
        error, LXG_INPUT, "opacity-omit",
        "omit: keep scattering, free_free or (with metals) bound_free, or gas between the bumps "
        "would have no opacity at all");
  }
  return LXG_OK;
}

enum lxg_status lxg_opacity_create_without(enum lxg_opacity_formula formula, unsigned omit,
                                           const struct lxg_composition *composition,
                                           struct lxg_opacity **opacity, struct lxg_error *error) {
  *opacity = NULL;
  enum lxg_status status = lxg_composition_check(composition, error);
  struct lxg_opacity *made = NULL;
  if (status == LXG_OK) {
    made = lxg_alloc(1, sizeof *made);
    status = made != NULL ? LXG_OK : lxg_error_set(error, LXG_MEMORY, "memory", "opacity: out of memory");
  }
  if (status == LXG_OK) {
    made->formula = formula;
    made->scattering = lxg_composition_kappa_e(composition);
    lxg_opacity_reference_init(&made->reference, composition);
    lxg_opacity_kramers_init(&made->kramers, &lxg_opacity_kramers_calibrated, composition, omit);
    status = check_omit(formula, omit, &made->kramers, error);
  }
  if (status != LXG_OK) {
    lxg_opacity_destroy(made);
    lxg_error_context(error, "preparing the opacity");
    return status;
  }
  *opacity = made;
  return LXG_OK;
}

enum lxg_status lxg_opacity_create_formula(enum lxg_opacity_formula formula,
                                           const struct lxg_composition *composition,
                                           struct lxg_opacity **opacity, struct lxg_error *error) {
  return lxg_opacity_create_without(formula, 0, composition, opacity, error);
}

/* False for NaN too. */
static bool in_domain(double ln_rho, double ln_t) {
  return ln_t >= ln_least_t && ln_t <= ln_most_t && ln_rho >= ln_least_rho && ln_rho <= ln_most_rho;
}

enum lxg_status lxg_opacity_at(const struct lxg_opacity *opacity, double ln_rho, double ln_t,
                               struct lxg_opacity_value *value) {
  if (!in_domain(ln_rho, ln_t)) {
    return LXG_DOMAIN;
  }
  if (opacity->tabulated) {
    return lxg_opacity_table_at(opacity, ln_rho, ln_t, value);
  }
  struct opacity_sum sum = {opacity->scattering, 0.0, 0.0};
  if (opacity->formula == LXG_OPACITY_REFERENCE) {
    sum = lxg_opacity_reference_at(&opacity->reference, ln_rho, ln_t);
  } else if (opacity->formula == LXG_OPACITY_KRAMERS) {
    sum = lxg_opacity_kramers_at(&opacity->kramers, ln_rho, ln_t);
  }
  const double inverse = 1.0 / sum.kappa;
  value->kappa = sum.kappa;
  value->dlnk_dlnrho = sum.by_lnrho * inverse;
  value->dlnk_dlnt = sum.by_lnt * inverse;
  value->table_weight = 0.0;
  return LXG_OK;
}

enum lxg_status lxg_opacity_shares(const struct lxg_opacity *opacity, double ln_rho, double ln_t,
                                   double share[LXG_OPACITY_SOURCES], double *known) {
  if (!in_domain(ln_rho, ln_t)) {
    return LXG_DOMAIN;
  }
  for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
    share[i] = 0.0;
  }
  *known = opacity->formula == LXG_OPACITY_REFERENCE ? 0.0 : 1.0;
  if (opacity->formula == LXG_OPACITY_SCATTERING) {
    share[LXG_OPACITY_SOURCE_SCATTERING] = 1.0;
  } else if (opacity->formula == LXG_OPACITY_KRAMERS) {
    lxg_opacity_kramers_shares(&opacity->kramers, ln_rho, ln_t, share);
  }
  if (opacity->tabulated) {
    struct lxg_opacity_value value;
    const enum lxg_status status = lxg_opacity_table_at(opacity, ln_rho, ln_t, &value);
    if (status != LXG_OK) {
      return status;
    }
    *known = 1.0 - value.table_weight;
    for (size_t i = 0; i < LXG_OPACITY_SOURCES; i++) {
      share[i] *= *known;
    }
  }
  return LXG_OK;
}

void lxg_opacity_destroy(struct lxg_opacity *opacity) {
  if (opacity != NULL) {
    lxg_opacity_surface_free(&opacity->surface);
    lxg_free(opacity);
  }
}
