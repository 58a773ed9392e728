// What a low-temperature temper takes from the hardness of martensite. No published curve covers 150-204 degC
// (R. A. Grange, C. R. Hribal, L. F. Porter, Metall. Trans. 8A (1977) 1775 begins at 204), so this is common
// practice, no source: at 180 degC for 2 h about 1 HRC (15 HV) at 0.35 wt% C and about 2 HRC (50 HV) at 0.8;
// two fifths of it at 150 degC, 1.4 times at 200 degC, straight in the parameter of J. H. Hollomon and L. D.
// Jaffe (Trans. AIME 162 (1945) 223), T (20 + log10 hours), which also weighs the time.
#pragma once

#include <optional>

namespace hearthfront::solver {

// Law: 150-204 degC, 0.5-10 h.
struct Tempering {
  double temperature_degc = 180;
  double hours = 2;
};

// T (20 + log10 t), T in kelvin, t in hours.
double hollomon_jaffe_parameter(const Tempering& tempering);

struct TemperingDrop {
  double hv = 0;
  double sigma_hv = 0;  // one sigma: 10 HV, or two thirds of the drop where that is more
};

// Empty outside the law's range of temperature and time.
std::optional<TemperingDrop> tempering_drop(const Tempering& tempering, double carbon_wt_pct);

}  // namespace hearthfront::solver
