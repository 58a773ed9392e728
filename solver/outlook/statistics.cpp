#include "solver/outlook/statistics.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>

namespace hearthfront::solver {
namespace {

// Of the members' standard deviation.
constexpr double smoothing = 0.25;

double normal_below(double z) {
  return 0.5 * std::erfc(-z / std::numbers::sqrt2);
}

double rank_value(std::span<const double> sorted, double p) {
  const double rank = p * static_cast<double>(sorted.size() + 1);
  const double whole = std::floor(rank);
  if (whole < 1 || whole > static_cast<double>(sorted.size()) ||
      (whole == static_cast<double>(sorted.size()) && rank > whole))
    return std::numeric_limits<double>::quiet_NaN();
  const auto below = static_cast<std::size_t>(whole) - 1;
  if (below + 1 == sorted.size()) return sorted[below];
  return sorted[below] + (rank - whole) * (sorted[below + 1] - sorted[below]);
}

}  // namespace

double quantile(std::span<double> values, double p) {
  std::sort(values.begin(), values.end());
  return rank_value(values, p);
}

Band band_of(std::span<double> values) {
  std::sort(values.begin(), values.end());
  return {rank_value(values, 0.05), rank_value(values, 0.5), rank_value(values, 0.95)};
}

SmoothedMembers::SmoothedMembers(std::span<const double> values, double extra_sd) : values_(values) {
  const auto n = static_cast<double>(values.size());
  for (const double value : values) mean_ += value / n;
  double variance = 0;
  for (const double value : values) variance += (value - mean_) * (value - mean_) / (n - 1);
  shrink_ = 1 / std::sqrt(1 + smoothing * smoothing);
  width_ = std::sqrt(smoothing * smoothing * shrink_ * shrink_ * variance + extra_sd * extra_sd);
}

double SmoothedMembers::below(std::size_t m, double limit) const {
  const double value = mean_ + shrink_ * (values_[m] - mean_);
  if (width_ <= 0) return value < limit ? 1.0 : 0.0;
  return normal_below((limit - value) / width_);
}

double SmoothedMembers::chance_below(double limit) const {
  double sum = 0;
  for (std::size_t m = 0; m < values_.size(); ++m) sum += below(m, limit);
  return sum / static_cast<double>(values_.size());
}

}  // namespace hearthfront::solver
