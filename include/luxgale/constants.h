/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * constants.h - physical constants in CGS, each with its source and edition.
 *
 * CODATA 2018: Tiesinga et al. 2021, Rev. Mod. Phys. 93, 025010. IAU 2015 B3 (nominal solar values), IAU 2015 B2
 * (zero point of bolometric magnitudes). GSL's constants are older editions and are not used.
 */
#ifndef LUXGALE_CONSTANTS_H
#define LUXGALE_CONSTANTS_H

#define LXG_PI 3.14159265358979323846
#define LXG_LN10 2.30258509299404568402

#define LXG_SPEED_OF_LIGHT 2.99792458e10  /* c [cm s^-1], exact (CODATA 2018) */
#define LXG_GRAVITATION 6.67430e-8        /* G [cm^3 g^-1 s^-2] (CODATA 2018) */
#define LXG_BOLTZMANN 1.380649e-16        /* k [erg K^-1], exact (CODATA 2018) */
#define LXG_PLANCK 6.62607015e-27         /* h [erg s], exact (CODATA 2018) */
#define LXG_ATOMIC_MASS 1.66053906660e-24 /* m_u [g] (CODATA 2018) */
#define LXG_HYDROGEN_MASS 1.6735328e-24   /* mass of a 1H atom [g]: 1.00782503 m_u (AME 2016, from memory) */
#define LXG_ELECTRON_CHARGE 4.80320471257e-10 /* e [esu] (CODATA 2018: 1.602176634e-19 C times c/10) */
#define LXG_ELECTRON_MASS 9.1093837015e-28    /* m_e [g] (CODATA 2018) */
#define LXG_ELECTRON_VOLT 1.602176634e-12     /* eV [erg], exact (CODATA 2018) */
#define LXG_STEFAN_BOLTZMANN 5.670374419e-5   /* sigma [erg cm^-2 s^-1 K^-4] (CODATA 2018) */
#define LXG_RADIATION (4.0 * LXG_STEFAN_BOLTZMANN / LXG_SPEED_OF_LIGHT) /* a [erg cm^-3 K^-4] */

#define LXG_SOLAR_GM 1.3271244e26                       /* GM of the Sun [cm^3 s^-2] (IAU 2015 B3) */
#define LXG_SOLAR_MASS (LXG_SOLAR_GM / LXG_GRAVITATION) /* [g] */
#define LXG_SOLAR_RADIUS 6.957e10                       /* [cm] (IAU 2015 B3) */
#define LXG_SOLAR_LUMINOSITY 3.828e33                   /* [erg s^-1] (IAU 2015 B3) */
#define LXG_BOLOMETRIC_ZERO 3.0128e35                   /* luminosity of M_bol = 0 [erg s^-1] (IAU 2015 B2) */

#define LXG_DAY 86400.0                  /* [s] */
#define LXG_YEAR 3.15576e7               /* Julian year [s] */
#define LXG_PARSEC 3.0856775814913673e18 /* [cm] (IAU 2015 B2: 648000/pi au) */
#define LXG_KM 1.0e5                     /* [cm] */

#endif
