// Continuing a series beyond its ends.
#pragma once

#include <cstddef>
#include <span>

namespace clickwise::signal {

// Odd reflection at both ends, of as many turns as it takes, bent so that the acceleration of the
// end goes on: y(-t) = 2 y_0 - y(t) + a T^2 (1 - exp(-t^2 / T^2)), T being the length of the fit.
// y_0 and a are those of a parabola fitted to the end; stretches of fewer than four samples turn
// about their end sample, unbent.
class OddReflection {
public:
  // The parabolas are fitted to `fit` samples (at least four) at either end; an acceleration that
  // the samples' noise (rms) might feign is left out. values must not be
  // empty and must outlive this.
  OddReflection(std::span<const double> values, std::size_t fit, double noise);

  // The continued series at sample i, inside or outside.
  double at(std::ptrdiff_t i) const;

private:
  struct End {
    double value;
    double acceleration;  // a, per sample squared
  };
  static End fit_end(std::span<const double> values, double noise, bool from_back);
  double turned(const End& end, std::ptrdiff_t beyond) const;

  std::span<const double> values_;
  double length_;  // T, samples
  End first_;
  End last_;
};

}  // namespace clickwise::signal
