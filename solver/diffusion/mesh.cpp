#include "solver/diffusion/mesh.h"

#include <algorithm>
#include <cmath>
#include <stdexcept>

namespace hearthfront::solver {
namespace {

// Relative area at depth x, and its integral from the surface to x.
double area_at(const Section& s, double x) {
  switch (s.shape) {
    case Shape::plate:
      return 1.0;
    case Shape::cylinder:
      return 1.0 - x / s.extent_m;
    case Shape::sphere:
      return (1.0 - x / s.extent_m) * (1.0 - x / s.extent_m);
    case Shape::bore:
      return 1.0 + x / s.bore_radius_m;
  }
  return 1.0;
}

// Volume between two depths; written in the midpoint and the width to avoid cancellation in thin cells.
double volume_between(const Section& s, double x0, double x1) {
  const double width = x1 - x0;
  const double middle = 0.5 * (x0 + x1);
  double volume = width * area_at(s, middle);
  // The midpoint rule is exact for linear areas; the sphere's square adds w^3 / (12 R^2).
  if (s.shape == Shape::sphere) volume += width * width * width / (12.0 * s.extent_m * s.extent_m);
  return volume;
}

std::vector<double> graded_faces(double extent, const MeshDensity& density) {
  const double bulk = std::max(density.surface_cell_m, density.diffusion_length_m / density.cells_per_length);
  const double fine_to = density.fine_lengths * density.diffusion_length_m;
  std::vector<double> face{0.0};
  double width = density.surface_cell_m;
  while (face.back() < extent) {
    face.push_back(face.back() + width);
    const double limit = face.back() < fine_to ? bulk : extent;
    width = std::min(width * (face.back() < fine_to ? density.growth : density.core_growth), limit);
  }
  // Stretch or shrink the whole mesh onto the extent: ratios of neighbours stay as they are.
  if (face.size() > 2 && face.back() - extent > extent - face[face.size() - 2]) face.pop_back();
  const double scale = extent / face.back();
  for (double& x : face) x *= scale;
  face.back() = extent;
  return face;
}

}  // namespace

Mesh make_mesh(const Section& section, const MeshDensity& density) {
  const bool extent_ok = section.extent_m >= 0.2e-3 && section.extent_m <= 0.5;
  const bool bore_ok =
      section.shape != Shape::bore || (section.bore_radius_m >= 0.2e-3 && section.bore_radius_m <= 0.5);
  if (!extent_ok || !bore_ok) throw std::invalid_argument("section outside 0.2 mm to 500 mm");

  Mesh mesh;
  mesh.section = section;
  mesh.face_m = graded_faces(section.extent_m, density);
  const std::size_t n = mesh.face_m.size() - 1;
  for (std::size_t i = 0; i < n; ++i) {
    mesh.centre_m.push_back(0.5 * (mesh.face_m[i] + mesh.face_m[i + 1]));
    mesh.volume_m.push_back(volume_between(section, mesh.face_m[i], mesh.face_m[i + 1]));
  }
  mesh.face_area.resize(n + 1);
  mesh.conductance_per_m.assign(n + 1, 0.0);
  for (std::size_t i = 0; i <= n; ++i) mesh.face_area[i] = area_at(section, mesh.face_m[i]);
  for (std::size_t i = 1; i < n; ++i)
    mesh.conductance_per_m[i] = mesh.face_area[i] / (mesh.centre_m[i] - mesh.centre_m[i - 1]);
  return mesh;
}

}  // namespace hearthfront::solver
