#include "solver/material/hardness.h"

#include <algorithm>
#include <array>
#include <cstddef>

namespace hearthfront::solver {
namespace {

struct HardnessPair {
  double hrc, hv;
};
constexpr std::array<HardnessPair, 35> e140{
    {{20, 238}, {25, 266}, {30, 302}, {35, 345}, {38, 372}, {39, 382}, {40, 392}, {41, 402}, {42, 412},
     {43, 423}, {44, 434}, {45, 446}, {46, 458}, {47, 471}, {48, 484}, {49, 498}, {50, 513}, {51, 528},
     {52, 544}, {53, 560}, {54, 577}, {55, 595}, {56, 613}, {57, 633}, {58, 653}, {59, 674}, {60, 697},
     {61, 720}, {62, 746}, {63, 772}, {64, 800}, {65, 832}, {66, 865}, {67, 900}, {68, 940}}};

constexpr std::array<double, 5> martensite_columns{50, 80, 90, 95, 99};
struct CarbonRow {
  double carbon;
  std::array<double, 5> hrc;
};
constexpr std::array<CarbonRow, 7> hodge_orehoski{{{0.10, {26.2, 27.8, 30.7, 32.9, 38.5}},
                                                   {0.20, {31.8, 35.0, 38.2, 40.5, 44.2}},
                                                   {0.30, {37.5, 41.2, 44.6, 47.0, 50.3}},
                                                   {0.34, {39.5, 43.4, 46.9, 49.3, 52.7}},
                                                   {0.40, {42.4, 46.4, 50.0, 52.4, 56.1}},
                                                   {0.50, {46.8, 50.6, 54.3, 56.8, 60.9}},
                                                   {0.60, {50.7, 53.8, 57.5, 60.0, 64.3}}}};

double between(double x, double x0, double x1, double y0, double y1) {
  return y0 + (y1 - y0) * (x - x0) / (x1 - x0);
}

double at_martensite(const CarbonRow& row, double martensite_pct) {
  const double m = std::clamp(martensite_pct, martensite_columns.front(), martensite_columns.back());
  std::size_t j = 1;
  while (j + 1 < martensite_columns.size() && m > martensite_columns[j]) ++j;
  return between(m, martensite_columns[j - 1], martensite_columns[j], row.hrc[j - 1], row.hrc[j]);
}

}  // namespace

std::optional<double> hv_from_hrc(double hrc) {
  if (!(hrc >= e140.front().hrc && hrc <= e140.back().hrc)) return std::nullopt;
  std::size_t i = 1;
  while (i + 1 < e140.size() && hrc > e140[i].hrc) ++i;
  return between(hrc, e140[i - 1].hrc, e140[i].hrc, e140[i - 1].hv, e140[i].hv);
}

std::optional<double> hrc_from_hv(double hv) {
  if (!(hv >= e140.front().hv && hv <= e140.back().hv)) return std::nullopt;
  std::size_t i = 1;
  while (i + 1 < e140.size() && hv > e140[i].hv) ++i;
  return between(hv, e140[i - 1].hv, e140[i].hv, e140[i - 1].hrc, e140[i].hrc);
}

double martensite_hardness_hrc(double carbon_wt_pct, double martensite_pct) {
  const double c = std::clamp(carbon_wt_pct, hodge_orehoski.front().carbon, hodge_orehoski.back().carbon);
  std::size_t i = 1;
  while (i + 1 < hodge_orehoski.size() && c > hodge_orehoski[i].carbon) ++i;
  return between(c, hodge_orehoski[i - 1].carbon, hodge_orehoski[i].carbon,
                 at_martensite(hodge_orehoski[i - 1], martensite_pct),
                 at_martensite(hodge_orehoski[i], martensite_pct));
}

double martensite_hardness_hv(double carbon_wt_pct, double martensite_pct) {
  constexpr double full_martensite_pct = 99.0, plateau_from_wt_pct = 0.80, plateau_hv = 865.0;
  constexpr double table_end_wt_pct = hodge_orehoski.back().carbon;
  // The table lies within E140 everywhere.
  const double by_table = *hv_from_hrc(martensite_hardness_hrc(carbon_wt_pct, martensite_pct));
  if (!(carbon_wt_pct > table_end_wt_pct)) return by_table;
  const double full = *hv_from_hrc(martensite_hardness_hrc(table_end_wt_pct, full_martensite_pct));
  const double richer = between(std::min(carbon_wt_pct, plateau_from_wt_pct), table_end_wt_pct,
                                plateau_from_wt_pct, full, plateau_hv);
  return by_table * richer / full;
}

std::optional<double> carbon_for_hardness_hrc(double hrc, double martensite_pct) {
  for (std::size_t i = 1; i < hodge_orehoski.size(); ++i) {
    const double low = at_martensite(hodge_orehoski[i - 1], martensite_pct);
    const double high = at_martensite(hodge_orehoski[i], martensite_pct);
    if (hrc >= low && hrc <= high)
      return between(hrc, low, high, hodge_orehoski[i - 1].carbon, hodge_orehoski[i].carbon);
  }
  return std::nullopt;
}

}  // namespace hearthfront::solver
