#ifndef MODEL_PHASE_H
#define MODEL_PHASE_H

#include <stdbool.h>
#include <stddef.h>

#include "base/err.h"
#include "base/mat3.h"
#include "model/finding.h"

typedef struct {
	double a_A, b_A, c_A;
	double alpha_deg, beta_deg, gamma_deg;
} bh_cell;

/* x' = rotation x + shift, on fractional coordinates. */
typedef struct {
	int rotation[3][3];
	double shift[3];
} bh_symop;

enum { BH_SYMBOL_ROOM = 48 };

typedef struct {
	int number;		     /* 1..230                                   */
	int hall_number;	     /* 1..530, row of the database; 0 beyond it  */
	char symbol[BH_SYMBOL_ROOM]; /* Hermann-Mauguin of this setting          */
	char hall[BH_SYMBOL_ROOM];   /* Hall symbol                              */
	char choice[8];		     /* "1", "2", "H", "R", "b1", ...; "" if one */
	bh_symop *ops;
	size_t op_count;
	bool centrosymmetric;
} bh_space_group;

typedef struct {
	char label[32];
	int z;		  /* atomic number                           */
	int charge;	  /* of the ion, 0: neutral or not given     */
	double at[3];	  /* fractional                              */
	double reach_A;	  /* images nearer than this are one atom; 0: 0.06 */
	double occupancy; /* (0, 1]                                  */
	double b_iso_A2;  /* displacement parameter B                */
	bool b_known;	  /* false: the default stands in b_iso_A2   */
	bool tensor_known; /* beta holds; it is used instead of B     */
	double beta[6];	  /* β11 β22 β33 β12 β13 β23, T = exp(−Σ β_ij h_i h_j) */
	char assembly[8], alternative[8]; /* disorder: of one assembly, one alternative
					     stands in a cell at a time; "" : none */
	int multiplicity; /* images in the cell; set when resolved   */
	bh_place place;
} bh_site;

/* What a structure file says that a user must know of: not an error, the phase stands. */
typedef struct {
	bh_severity severity;
	const char *text, *remedy; /* remedy: what to do; "" */
	bh_place place;
} bh_remark;

/* Elements by mass. */
typedef struct {
	int z;
	double mass_frac;
} bh_element_share;

typedef struct {
	bh_element_share *elements; /* sorted by Z, no doubles */
	size_t count;		    /* 0: not known            */
} bh_composition;

typedef enum {
	BH_PHASE_ATOMS,	    /* cell, group and sites: positions and rates    */
	BH_PHASE_POSITIONS, /* cell and group only: positions                */
	BH_PHASE_LIST	    /* a list of d; rates when a corundum ratio says */
} bh_phase_kind;

/* What of a structure factor to leave out, for comparison with tables. */
typedef struct {
	bool anomalous;	 /* f' = f'' = 0                                     */
	bool charges;	 /* neutral atoms                                    */
	bool anisotropy; /* the isotropic B that a site states, else 0       */
} bh_without;

typedef struct {
	char text[40]; /* as written                                   */
	int h[3];      /* of a plane; 0 0 0 for a phase given as a list */
	double d_A;    /* resolved                                     */
	bh_place place;
} bh_target;

typedef struct {
	char name[64];
	bh_phase_kind kind;
	bh_place place;

	bh_cell cell;	      /* not for a list */
	bh_space_group group; /* not for a list */
	bh_site *sites;
	size_t site_count;

	double *list_d_A;	/* a list, strongest or as written  */
	double *list_intensity; /* as many; any scale               */
	size_t list_count;
	double corundum_ratio; /* I/I_c; 0: not known              */

	double share_frac; /* of the whole specimen, by weight, resolved */
	double size_nm;	   /* crystallite size; 0: no broadening         */
	double strain;	   /* ε of 4 ε tanθ                               */
	double march;	   /* March-Dollase r; 1: random                  */
	int march_axis[3];
	bh_target *targets;
	size_t target_count;

	char source[128]; /* structure file and block; "" : written in the request */
	bh_remark *remarks;
	size_t remark_count;

	/* resolved at reading */
	bh_composition composition;
	char formula[64];
	double density_g_cm3; /* X-ray density, or as stated; 0: not known */
	double volume_A3;     /* 0 for a list                              */
	double formula_units; /* formulas in the cell; 0: not known        */
} bh_phase;

#endif
