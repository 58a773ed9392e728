// The mesh of one section: finite volumes along the depth below the surface, fine at the surface, and
// reaching the whole way to the centre (or the far wall of a bore), so that nothing is ever truncated.
// Immutable after make_mesh. Lengths in metres inside the solver.
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

// How fine a mesh to make. `diffusion_length_m` is 2 sqrt(int D dt) of the expected cycle; cells are a
// fixed fraction of it where the profile bends, so that long and short cycles get the same accuracy from
// about the same number of cells. The defaults keep the depth of the base case within 0.1 um (tests).
struct MeshDensity {
  double diffusion_length_m = 1.0e-3;
  double surface_cell_m = 1.5e-6;
  double growth = 1.04;          // of neighbouring cells near the surface
  double cells_per_length = 42;  // bulk cell = diffusion_length / this
  double fine_lengths = 1.2;     // the bulk spacing is kept to this many diffusion lengths
  double core_growth = 1.1;      // beyond
};

struct Mesh {
  Section section;
  std::vector<double> face_m;    // n+1 depths, 0 = surface
  std::vector<double> centre_m;  // n
  // Per unit of surface area, so that a plate has area 1 everywhere.
  std::vector<double> volume_m;           // n: int A dx over the cell
  std::vector<double> face_area;          // n+1
  std::vector<double> conductance_per_m;  // n+1: area / distance between centres; [0] and [n] unused
  std::size_t cells() const { return centre_m.size(); }
};

// Throws std::invalid_argument where the section is outside its valid range.
Mesh make_mesh(const Section& section, const MeshDensity& density = {});

}  // namespace hearthfront::solver
