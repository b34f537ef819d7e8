/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * propagation_internal.h - tables of members, times at which winds are evaluated, and the evaluation of one draw.
 */
#ifndef LUXGALE_PROPAGATION_INTERNAL_H
#define LUXGALE_PROPAGATION_INTERNAL_H

#include "luxgale/propagation.h"

/* Numbers of a member; linear between members. */
enum {
  NUMBER_LN_RATE,
  NUMBER_SPEED_SQ, /* [cm^2 s^-2] */
  NUMBER_LN_LUMINOSITY,
  NUMBER_LN_BASE, /* ln of the base luminosity, not below a floor */
  NUMBER_LN_TEMPERATURE,
  NUMBER_LN_RADIUS,
  NUMBER_LN_PHOTOSPHERE_SPEED,
  NUMBER_INFINITY, /* light at infinity over the nominal L_Edd */
  NUMBERS
};

enum { RUNS_MOST = 64 };

/* Members of one family, or of an interpolated one. */
struct members {
  size_t count;
  double *number[NUMBERS]; /* [count] each */
  double *key;             /* [count] what a history gives: ln L or absolute magnitude */
  double ln_l_edd, ln_escape;
  size_t runs;
  size_t run[RUNS_MOST + 1]; /* members at which the key turns round, and the last */
};

/* Place between two members. */
struct place {
  size_t segment;
  double fraction;
};

/* What turns members into keys. */
struct keying {
  enum { KEY_BASE, KEY_PHOTOSPHERE, KEY_MAGNITUDE } kind;
  enum lxg_band band;
  struct lxg_light_options light;
};

/* Doubles that `count` members need, and laying them out in that memory. */
size_t lxg_members_size(size_t count);
void lxg_members_place(struct members *members, size_t count, double *memory);

/* Winds of a family that count: for magnitudes those of the wanted branch (observed.h), else all. */
struct reach {
  size_t first, last;
};
struct reach lxg_members_reach(const struct lxg_family *family, const struct keying *keying,
                               enum lxg_branch branch);

/* Where each of these winds stands between first and last, 0 to 1 in arc length. */
void lxg_members_shares(const struct lxg_family *family, struct reach reach, double share[]);

/* Fills from the members of a family at given shares; `l_edd` is the nominal one, `escape` G M/R_0 [erg g^-1]. */
void lxg_members_fill(struct members *members, const struct lxg_family *family, struct reach reach,
                      const double share[], double l_edd, double own_l_edd, double escape);

/* Keys and runs from the numbers. LXG_LIMIT "propagation-runs" when the key turns round too often. */
enum lxg_status lxg_members_key(struct members *members, const struct keying *keying,
                                struct lxg_error *error);

/* The member with a key and the smallest or largest rate; false if there is none. */
bool lxg_members_find(const struct members *members, double key, enum lxg_branch branch, struct place *place);
double lxg_members_number(const struct members *members, int number, struct place place);

/* Weighted sum of tables: nominal, and two of each parameter at displacements in sigma. */
void lxg_members_combine(const struct members table[], size_t parameters, const double displacement[],
                         struct members *sum);

/* Traces the families and fills the tables: [1 + 2 parameters + 1], the last the check's. */
enum lxg_status lxg_propagation_trace(const struct lxg_propagation_input *input, const struct keying *keying,
                                      const double share[], struct members table[], struct lxg_error *error);

/* One time at which winds are evaluated. */
struct sample {
  double time;     /* [s] */
  double key;      /* nominal: ln L or absolute magnitude */
  size_t epoch;    /* the one at or before it */
  double fraction; /* of the way to the next one; 0 at an epoch */
};

struct engine {
  const struct lxg_propagation_input *input;
  struct keying keying;
  double *memory, *share; /* of all tables; place of each member */
  struct members *table;  /* [2 + 2 parameters] */
  size_t samples, epochs;
  struct sample *sample;
  double *sigma;  /* [epochs] of the key */
  double per_mag; /* change of the key per magnitude of calibration */
  int noise, scale, distance, extinction, zero_point,
      model; /* sources, -1 where absent; the first of the model */
};

/* Times and nominal keys. */
enum lxg_status lxg_propagation_sample(struct engine *engine, struct lxg_error *error);

/* Integrals and numbers of the epochs for given members; noise [epochs] in units of the key or NULL. */
void lxg_propagation_integrate(const struct engine *engine, const struct members *members,
                               const double noise[], double shift, double outputs[], double profile[]);

#endif
