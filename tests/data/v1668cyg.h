/* SPDX-License-Identifier: GPL-3.0-or-later
 *
 * v1668cyg.h - V magnitudes of the nova V1668 Cygni after its eruption of 1978, for tests only.
 *
 * Source: Information Bulletin on Variable Stars 1913 (photoelectric V), JD - 2443000. The peak, V = 6.2 on 1978 September 12.2
 * (JD 2443763.7), is from IAU Circular 3268, whose V of September 12.05 to 14.04 are 6.0, 6.2, 6.00 and 6.18. The papers state no
 * errors of single points; 0.02 mag is assumed, 0.1 mag for the peak.
 */
#ifndef LUXGALE_TESTS_V1668CYG_H
#define LUXGALE_TESTS_V1668CYG_H

static const double v1668cyg_peak_jd = 763.7;
static const double v1668cyg_peak_v = 6.2;

static const struct {
  double jd, v;
} v1668cyg[] = {{771.300, 7.87},  {772.300, 7.82},  {774.344, 8.03},  {775.292, 8.17},  {776.333, 8.18},
                {777.451, 8.38},  {778.319, 8.40},  {779.302, 8.53},  {781.310, 8.61},  {788.278, 9.28},
                {789.278, 9.26},  {793.332, 9.77},  {804.292, 10.19}, {805.278, 10.27}, {806.292, 10.37},
                {807.250, 10.46}, {810.243, 10.54}, {811.253, 10.52}, {813.253, 10.75}, {823.253, 11.10},
                {829.215, 11.19}, {832.271, 11.24}, {833.233, 11.24}, {835.208, 11.20}, {837.226, 11.32},
                {838.217, 11.35}, {843.215, 11.41}, {849.265, 11.47}};

#endif
