/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * opacity.c - creation of an opacity and the one door through which it is read (see opacity.h).
 */
#include "luxgale/opacity.h"

#include "luxgale/memory.h"
#include "opacity/opacity_internal.h"

#include <math.h>

struct lxg_opacity {
  enum lxg_opacity_formula formula;
  double scattering; /* 0.2 (1 + X) [cm^2 g^-1] */
  struct lxg_opacity_reference_law reference;
  struct lxg_opacity_kramers_law kramers;
};

enum lxg_status lxg_opacity_create_formula(enum lxg_opacity_formula formula,
                                           const struct lxg_composition *composition,
                                           struct lxg_opacity **opacity, struct lxg_error *error) {
  *opacity = NULL;
  const enum lxg_status status = lxg_composition_check(composition, error);
  if (status != LXG_OK) {
    lxg_error_context(error, "preparing the opacity");
    return status;
  }
  struct lxg_opacity *made = lxg_alloc(1, sizeof *made);
  if (made == NULL) {
    return lxg_error_set(error, LXG_MEMORY, "memory", "opacity: out of memory");
  }
  made->formula = formula;
  made->scattering = lxg_composition_kappa_e(composition);
  lxg_opacity_reference_init(&made->reference, composition);
  lxg_opacity_kramers_init(&made->kramers, composition);
  *opacity = made;
  return LXG_OK;
}

enum lxg_status lxg_opacity_at(const struct lxg_opacity *opacity, double ln_rho, double ln_t,
                               struct lxg_opacity_value *value) {
  struct lxg_opacity_sum sum = {opacity->scattering, 0.0, 0.0};
  if (opacity->formula == LXG_OPACITY_REFERENCE) {
    sum = lxg_opacity_reference_at(&opacity->reference, ln_rho, ln_t);
  } else if (opacity->formula == LXG_OPACITY_KRAMERS) {
    sum = lxg_opacity_kramers_at(&opacity->kramers, ln_rho, ln_t);
  }
  const struct lxg_opacity_value found = {
      .kappa = sum.kappa,
      .dlnk_dlnrho = sum.by_lnrho / sum.kappa,
      .dlnk_dlnt = sum.by_lnt / sum.kappa,
      .table_weight = 0.0,
  };
  /* The sum of the arguments is finite only if both are (or if they cancel, which the slopes catch). */
  if (!(found.kappa > 0.0 && isfinite(ln_rho + ln_t) && isfinite(found.kappa) &&
        isfinite(found.dlnk_dlnrho) && isfinite(found.dlnk_dlnt))) {
    return LXG_DOMAIN;
  }
  *value = found;
  return LXG_OK;
}

void lxg_opacity_destroy(struct lxg_opacity *opacity) {
  lxg_free(opacity);
}
