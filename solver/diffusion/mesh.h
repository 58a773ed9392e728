// The mesh of one section: nodes along the depth below the surface, the first on the surface, fine there,
// and reaching to the centre (or the far wall of a bore), so that nothing is ever truncated.
// Immutable after make_mesh. Lengths in metres inside the solver.
//
// With C at the nodes and Phi = int D dC, Fick's law d(A C)/dt = d/dx( A dPhi/dx ) is tested with the hat
// functions N_i that are linear in int dx/A. The right side is then exact whatever the spacing and shape,
//   int N_i A dC/dt dx = g_i (Phi_{i-1} - Phi_i) - g_{i+1} (Phi_i - Phi_{i+1}),   1/g_i = int dx/A,
// and only the left is approximated, by the parabola through the three nodes (B. Numerov's weights
// 1/12, 10/12, 1/12 where the spacing is even): fourth order in space, tridiagonal, and conservative,
// because the sum of all rows is the flux through the surface.
#pragma once

#include <cstddef>
#include <vector>

namespace hearthfront::solver {

enum class Shape { plate, cylinder, sphere, bore };

// Section of a part. Valid: half thickness, radius or wall 0.2 mm to 500 mm.
//   plate     carburized from both sides, `extent_m` = half the thickness
//   cylinder  solid, carburized outside, `extent_m` = radius
//   sphere    `extent_m` = radius
//   bore      carburized inside, `bore_radius_m`, `extent_m` = wall (no flux leaves the outside)
struct Section {
  Shape shape = Shape::plate;
  double extent_m = 0.01;
  double bore_radius_m = 0;
};

// How fine a mesh to make. `diffusion_length_m` is 2 sqrt(int D dt) of the expected cycle; spacings are a
// fixed fraction of it where the profile bends, so that long and short cycles get the same accuracy from
// about the same number of nodes. The defaults keep depths of the base case within 0.1 um (tests).
struct MeshDensity {
  double diffusion_length_m = 1.0e-3;
  double surface_spacing_m = 3.0e-6;
  double growth = 1.2;           // of neighbouring spacings near the surface
  double nodes_per_length = 14;  // bulk spacing = diffusion_length / this
  double fine_lengths = 1.2;     // the bulk spacing is kept to this many diffusion lengths
  double core_growth = 1.2;      // beyond
};

struct Mesh {
  Section section;
  std::vector<double> depth_m;  // n nodes, 0 = surface; the last is half a spacing before the centre
  // Per unit of surface area, so that a plate has area 1 everywhere.
  std::vector<double> conductance_per_m;  // n+1: between nodes i-1 and i; [0] and [n] are 0
  // Row i of the left side: lower[i] dC_{i-1}/dt + diagonal[i] dC_i/dt + upper[i] dC_{i+1}/dt, in metres.
  std::vector<double> mass_lower_m, mass_diagonal_m, mass_upper_m;
  std::vector<double> volume_m;  // n: column sums, so that the carbon inside is sum of volume x C
  // Even, so that the step may take nodes two at a time.
  std::size_t nodes() const { return depth_m.size(); }
};

// Throws std::invalid_argument where the section is outside its valid range.
Mesh make_mesh(const Section& section, const MeshDensity& density = {});

}  // namespace hearthfront::solver
