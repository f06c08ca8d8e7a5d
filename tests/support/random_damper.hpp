// Dampers drawn at random within what bike files allow, for property tests.
#pragma once

#include <cmath>
#include <random>

#include "clickwise/bike/bike.hpp"
#include "clickwise/damper/law.hpp"

namespace clickwise::test {

class RandomDampers {
public:
  explicit RandomDampers(unsigned seed) : random_(seed) {}

  double between(double low, double high) {
    return std::uniform_real_distribution<double>(low, high)(random_);
  }
  double log_between(double low, double high) {
    return std::exp(between(std::log(low), std::log(high)));
  }
  int whole(int low, int high) { return std::uniform_int_distribution<int>(low, high)(random_); }

  // Bleed, valve and port, with both adjusters away from the ends of their range.
  bike::HydraulicSide side() {
    bike::HydraulicSide side;
    const double closed_m_s = log_between(0.005, 0.05);
    const double open_n = log_between(40.0, 300.0);
    side.bleed = clicks(closed_m_s, closed_m_s * between(4.0, 15.0));
    side.valve = clicks(open_n * between(2.0, 5.0), open_n);
    side.slope_n_s_m = log_between(50.0, 1500.0);
    side.port_n_s2_m2 = whole(0, 3) == 0 ? 0.0 : log_between(1.0, 80.0);
    return side;
  }

  damper::Law law() {
    return {.bleed_m_s = whole(0, 4) == 0 ? 0.0 : log_between(1e-4, 2.0),
            .opening_n = whole(0, 4) == 0 ? 0.0 : log_between(1.0, 2000.0),
            .slope_n_s_m = log_between(1.0, 5000.0),
            .port_n_s2_m2 = whole(0, 2) == 0 ? 0.0 : log_between(0.1, 200.0)};
  }

private:
  bike::Clicks clicks(double closed, double open) {
    const int count = whole(4, 24);
    return {closed, open, count, whole(1, count - 1)};
  }

  std::mt19937 random_;
};

}  // namespace clickwise::test
