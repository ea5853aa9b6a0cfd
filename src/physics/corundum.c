#include "physics/corundum.h"

#include "base/units.h"
#include "data/anodes.h"
#include "physics/amplitude.h"
#include "physics/bragg.h"
#include "physics/cell.h"
#include "physics/geometry.h"
#include "physics/hkl.h"
#include "physics/structure.h"
#include "physics/symmetry.h"

bool bh_corundum_strength(double *strength, double *lorentz_polarization, bh_arena *arena,
			  bh_err *err)
{
	static const int h[3] = { 1, 1, 3 };
	bh_site sites[] = {
		{ .z = 13, .at = { 0, 0, 0.35216 }, .occupancy = 1, .b_iso_A2 = 0.3 },
		{ .z = 8, .at = { 0.30668, 0, 0.25 }, .occupancy = 1, .b_iso_A2 = 0.4 },
	};
	bh_phase phase = {
		.kind = BH_PHASE_ATOMS,
		.cell = { 4.76050, 4.76050, 12.9956, 90, 90, 120 },
		.sites = sites,
		.site_count = 2,
		.march = 1,
	};
	double wavelength_A = bh_anode_find("Cu")->ka1_A, d_A, two_theta_deg = 0, f2;
	int planes[BH_MAX_EQUIVALENTS][3];
	bh_mat3 reciprocal;
	enum {
		R_3C_HEXAGONAL = 460
	}; /* row of the database: number 167, hexagonal axes */

	if (!bh_symmetry_row(&phase.group, arena, R_3C_HEXAGONAL, err) ||
	    !bh_structure_resolve(&phase, arena, err) ||
	    !bh_cell_reciprocal(&reciprocal, &phase.cell))
		return false;
	d_A = bh_cell_d_A(&reciprocal, h);
	bh_bragg_two_theta_deg(&two_theta_deg, d_A, wavelength_A);
	f2 = bh_amplitude_f2(&phase, h, d_A, bh_energy_keV(wavelength_A),
			     (bh_without){ false });
	*strength = (double)bh_hkl_equivalents(&phase.group, h, planes) * f2 /
		    (phase.volume_A3 * phase.volume_A3 * phase.density_g_cm3);
	*lorentz_polarization =
		bh_geometry_lorentz_polarization(1, bh_rad(two_theta_deg / 2));
	return true;
}
