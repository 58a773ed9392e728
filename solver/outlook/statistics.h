// What is said of members: the band, and the chance of a window. Values in any one unit.
#pragma once

#include <optional>
#include <span>

namespace hearthfront::solver {

struct Band {
  double low = 0, median = 0, high = 0;  // 5, 50 and 95 %
};

// Quantile p of n values by rank p (n + 1), linear between neighbours (Weibull's plotting position: an unseen
// value lies below it with chance p, whatever the distribution). Sorts `values`. NaN where n p is out of
// reach.
double quantile(std::span<double> values, double p);
Band band_of(std::span<double> values);

// Smoothing of chances: the half-step of each member's window is a normal of this width, and members are
// drawn together so that the variance stays what it was (M. Fryer, J. Inst. Maths Applics 18 (1976) 371; B.
// W. Silverman, Density Estimation, 1986, section 6.4.1: kernel estimates with shrunken data).
class SmoothedMembers {
 public:
  // `extra_sd`: scatter of a measurement to add, >= 0.
  explicit SmoothedMembers(std::span<const double> values, double extra_sd = 0);
  // Of member m alone, 0-1.
  double below(std::size_t m, double limit) const;
  double inside(std::size_t m, double low, double high) const { return below(m, high) - below(m, low); }
  // Mean over the members.
  double chance_below(double limit) const;
  std::size_t size() const { return values_.size(); }

 private:
  std::span<const double> values_;
  double mean_ = 0, shrink_ = 1, width_ = 0;
};

}  // namespace hearthfront::solver
