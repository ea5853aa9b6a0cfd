#ifndef PHYSICS_XRAY_H
#define PHYSICS_XRAY_H

#include <stdbool.h>

#include "data/elements.h"

/* Door to the atomic database (xraylib 4, T. Schoonjans et al., Spectrochim. Acta B 66
 * (2011) 776). Elements Z = 1 to 92; energies clamped to 0.1 to 800 keV, where every table
 * is defined. No function fails inside these limits: what is physically nothing is 0. */

/* Atomic number of a symbol ("Fe"); 0 when there is none up to Z = 92. */
int bh_xray_z(const char *symbol);
const char *bh_xray_symbol(int z);   /* "Fe"; "?" outside 1 to 92   */
double bh_xray_molar_mass_g(int z);  /* g/mol                       */
double bh_xray_density_g_cm3(int z); /* of the element as it stands */

/* Form factor of the free neutral atom, electrons; s = sinθ/λ in 1/Å. Good enough for
 * diffuse scattering; structure factors use the table of data/form_factors. */
double bh_xray_f0(int z, double s_inv_A);
double bh_xray_f_prime(int z, double energy_keV);	 /* usual sign                */
double bh_xray_f_double_prime(int z, double energy_keV); /* ≥ 0                       */

/* Total attenuation coefficient μ/ρ, cm²/g. */
double bh_xray_attenuation_cm2_g(int z, double energy_keV);

typedef enum { BH_SHELL_K, BH_SHELL_L1, BH_SHELL_L2, BH_SHELL_L3, BH_SHELLS } bh_shell;

/* Absorption edge, keV; 0 when the element has no such shell in the tables. */
double bh_xray_edge_keV(int z, bh_shell shell);

typedef enum { BH_FL_KA, BH_FL_KB, BH_FL_LA, BH_FL_LB, BH_FL_GROUPS } bh_fl_group;

const char *bh_xray_group_name(bh_fl_group group); /* "Ka", "Kb", "La", "Lb" */
/* Mean energy of the group, keV; 0 when the element has none. */
double bh_xray_group_keV(int z, bh_fl_group group);
/* Fluorescence cross section of the group, cm²/g; 0 below the edge.
 * (photoelectric partial × yield × radiative share, Kissel tables) */
double bh_xray_fluorescence_cm2_g(int z, bh_fl_group group, double energy_keV);

double bh_xray_yield(int z, bh_shell shell); /* fluorescence yield ω         */
/* Share of the K radiation in a line: Kα1, Kα2, all of Kβ (sum 1). */
double bh_xray_k_share_ka1(int z);
double bh_xray_k_share_ka2(int z);
double bh_xray_k_share_kb(int z);

/* Compton scattering of unpolarized photons, cm²/(g·sr). */
double bh_xray_compton_cm2_g_sr(int z, double energy_keV, double two_theta_rad);

/* Energy of a photon after Compton scattering, keV. */
double bh_xray_compton_keV(double energy_keV, double two_theta_rad);

#endif
