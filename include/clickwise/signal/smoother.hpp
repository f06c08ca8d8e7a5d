// Travel and shaft velocity, with a known sigma, from noisy readings on a uniform time base; no
// filter is chosen by hand.
//
// The readings are y_i = x(t_i) + e_i with white e of standard deviation n. A bank of quintic
// smoothing splines with cut-offs f_0 > f_1 > ... has the zero-phase gains
//   H_k(w) = 1 / (1 + (sin(w/2) / (pi f_k/rate))^6)                                    (3.1)
// and velocity is their derivative (central differences of order 8, of order 16 below 600 Hz).
// Neighbouring members differ by the bands b_k = v_k - v_(k+1), whose noise variance s_k^2 follows
// from n, the difference and H in closed form. The estimate is
//   v = v_last + sum_k g_k(t) b_k,   g_k^2 = w_k = e_k / (e_k + s_k^2),                (3.2)
// with e_k(t) the band's signal power around t. w_k is Wiener's gain, taken locally (N. Wiener,
// Extrapolation, Interpolation, and Smoothing of Stationary Time Series, 1949); its root keeps the
// band's signal power and with it the share of time above a speed, which w_k itself would lower.
// e_k is measured twice: first as the band's power less 1.5 s_k^2, then, over a quarter of the
// time, on what the first gains let through. Below 500 Hz, where motion fills the spectrum, less
// is taken off and less noise reckoned with (at 250 Hz and below 1.05 s_k^2 and 0.3 s_k^2): some
// more noise for the time at speed that the full toll would take. Travel takes the same gains.
// While nothing but noise is seen for some tenths of a second, only v_last (4 Hz) is let through.
// The error's variance is
//   sigma^2 = sum_k 2 w_k / (1 + g_k) u_k,                                             (3.3)
// u_k being the noise that H_k - H_(k+1), as an amplitude gain of power, leaves of the derivative.
//
// Measured on invented rides (quarter car, hits, kickers, bottom-outs; 12 bits over 170 mm), rms
// velocity error as a share of the velocity's rms, plain central difference in brackets:
//   rate     0.6 counts of noise    2.5 counts
//   200 Hz   2.1-3.1 % (7 %)        4.9-5.7 % (8 %)
//   500 Hz   1.6-2.6 % (2.6 %)      3.6-4.4 % (8 %)
//   1 kHz    1.3-1.7 % (4 %)        2.8-3.4 % (15 %)
// Figures are ranges over four rides, both ends (docs/accuracy.md); one fork that bottoms hard under
// rounded stamps has 6.4-7.7 % at 200 Hz. One sigma holds 63-75 % of errors, two 89-97 %. The bank
// runs in single precision: the last place of a travel is 4 nm, of a velocity at 1 kHz 0.01 mm/s.
#pragma once

#include <optional>
#include <span>
#include <string>
#include <vector>

namespace clickwise::signal {

inline constexpr double longest_span_s = 1.0;

struct SmootherOptions {
  // Quadratic Savitzky-Golay fits over this span (s, above 0, at most longest_span_s) in place of
  // the adaptive smoother. Their sigma holds the noise but not what the fit flattens.
  std::optional<double> fixed_span_s = std::nullopt;

  // Decay time, to both sides, over which the power of a band is averaged (s, > 0); slow bands take
  // longer.
  double memory_s = 0.033;
};

// What one channel's ride says about its noise, and what will therefore be done with it.
struct SmootherModel {
  double rate_hz = 0.0;
  double noise_m = 0.0;                  // rms noise of a reading, white
  double rest_velocity_noise_m_s = 0.0;  // rms error of the velocity while nothing moves
  double memory_s = 0.0;                 // see SmootherOptions
  int span_samples = 0;                  // odd span of the fixed fit; 0: adaptive
};

// All series have one value a reading.
struct Smoothed {
  std::vector<double> position_m;
  std::vector<double> velocity_m_s;
  std::vector<double> sigma_m_s;  // one standard deviation of the velocity's error
  double cutoff_hz = 0.0;         // half-gain frequency of the travel, median over the stretch
};

// The noise of one channel from its unbroken stretches (readings in m, all finite, one rate).
// Stretches may have any length, none included; below about a second in all the noise is poorly
// known. Throws std::invalid_argument on a NaN or infinite reading, a rate or an option that is
// not above 0. O(n log n).
SmootherModel fit_smoother(const std::vector<std::span<const double>>& stretches_m, double rate_hz,
                           const SmootherOptions& options = {});

// The shortest stretch that has a velocity (samples).
std::size_t shortest_stretch(const SmootherModel& model);

// Travel and velocity of one unbroken stretch. Ends: the stretch is continued by odd reflection
// with the end's acceleration kept; sigma grows by 1 + 4 exp(-t/2.5 ms) + 0.6 exp(-t/40 ms).
// Reversing the stretch in time reverses position and sigma, and turns the sign of velocity. Throws
// std::invalid_argument on readings that are not finite or fewer than shortest_stretch(). O(n).
Smoothed smooth(std::span<const double> readings_m, const SmootherModel& model);

// Where a stretch's series go: as many values each as there are readings.
struct SmoothedSeries {
  std::span<double> position_m;
  std::span<double> velocity_m_s;
  std::span<double> sigma_m_s;
};

// The same into series that are there; returns cutoff_hz. Throws std::invalid_argument where their
// sizes differ, too.
double smooth(std::span<const double> readings_m, const SmootherModel& model,
              const SmoothedSeries& out);

// One sentence for the report: what was used and what the noise is.
std::string describe(const SmootherModel& model);

}  // namespace clickwise::signal
