#include "clickwise/signal/smoother.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <numbers>
#include <random>
#include <thread>
#include <vector>

#include "clickwise/signal/savitzky_golay.hpp"

namespace signal = clickwise::signal;
using std::numbers::pi;

namespace {

using Series = std::vector<double>;

constexpr double count_m = 0.170 / 3640.0;  // 12 bits, calibrated over 3640 counts

double root_mean_square(const Series& values, std::size_t from = 0, std::size_t to = SIZE_MAX) {
  to = std::min(to, values.size());
  double sum = 0.0;
  for (std::size_t i = from; i < to; ++i) sum += values[i] * values[i];
  return std::sqrt(sum / static_cast<double>(to - from));
}

Series difference(const Series& a, const Series& b) {
  Series result(a.size());
  for (std::size_t i = 0; i < a.size(); ++i) result[i] = a[i] - b[i];
  return result;
}

// What a logger makes of the truth: white noise, then rounding to counts.
Series logged(const Series& truth_m, double noise_counts, unsigned seed) {
  std::mt19937_64 random(seed);
  std::normal_distribution<double> normal(0.0, noise_counts);
  Series readings;
  for (const double x : truth_m) {
    readings.push_back(count_m * std::round(x / count_m + normal(random)));
  }
  return readings;
}

struct Truth {
  Series travel_m, velocity_m_s;
};

// Rest, then a swing at 3 Hz with bursts of wheel hop at 18 Hz every second, then rest again.
Truth swing_with_hops(double rate_hz, double rest_s, double swing_s) {
  Truth truth;
  const auto samples = static_cast<std::size_t>((2.0 * rest_s + swing_s) * rate_hz);
  for (std::size_t i = 0; i < samples; ++i) {
    const double t = static_cast<double>(i) / rate_hz - rest_s;
    double x = 0.05, v = 0.0;
    if (t >= 0.0 && t < swing_s) {
      const double ease = std::pow(std::sin(pi * t / swing_s), 2.0);
      const double slope = pi / swing_s * std::sin(2.0 * pi * t / swing_s);
      const double decay = 12.0;
      const double u = t - std::floor(t);
      const double hop = 0.02 * u * decay * std::exp(-decay * u) * std::sin(36.0 * pi * u);
      const double hop_v =
          0.02 * decay * std::exp(-decay * u) *
          ((1.0 - decay * u) * std::sin(36.0 * pi * u) + 36.0 * pi * u * std::cos(36.0 * pi * u));
      const double wave = 0.03 * (1.0 - std::cos(6.0 * pi * t)) + hop;
      x += ease * wave;
      v = slope * wave + ease * (0.18 * pi * std::sin(6.0 * pi * t) + hop_v);
    }
    truth.travel_m.push_back(x);
    truth.velocity_m_s.push_back(v);
  }
  return truth;
}

signal::SmootherModel fit(const Series& readings_m, double rate_hz,
                          const signal::SmootherOptions& options = {}) {
  return signal::fit_smoother({readings_m}, rate_hz, options);
}

double total_noise_counts(double noise_counts) {
  return std::sqrt(noise_counts * noise_counts + 1.0 / 12.0);
}

// What the last place of a travel in single precision makes of a slope at 1 kHz.
constexpr double single_precision_m_s = 2e-5;

Series reversed(Series values) {
  std::reverse(values.begin(), values.end());
  return values;
}

}  // namespace

TEST_CASE("a reading's noise is read off the log, quantisation included", "[signal]") {
  for (const double rate_hz : {200.0, 1000.0}) {
    const Truth truth = swing_with_hops(rate_hz, 10.0, 100.0);
    for (const double noise_counts : {0.6, 2.5}) {
      CAPTURE(rate_hz, noise_counts);
      const Series y = logged(truth.travel_m, noise_counts, 3);
      // 120 s hold 480 blocks of at least 14 degrees of freedom: the quiet fifth is good to 2 %;
      // the hops' power at the top of 200 Hz may add a few per cent more.
      CHECK(fit(y, rate_hz).noise_m ==
            Approx(total_noise_counts(noise_counts) * count_m).epsilon(0.06));
    }
  }
}

TEST_CASE("velocity is closer to the truth than differences, and sigma says how close",
          "[signal]") {
  struct Limit {
    double rate_hz, noise_counts, share;
  };
  // The shares are the aims of docs/method, section 3.
  for (const Limit& limit : {Limit{1000.0, 0.6, 0.020}, Limit{200.0, 2.5, 0.060}}) {
    CAPTURE(limit.rate_hz, limit.noise_counts);
    const Truth truth = swing_with_hops(limit.rate_hz, 5.0, 60.0);
    const Series y = logged(truth.travel_m, limit.noise_counts, 17);
    const signal::Smoothed out = signal::smooth(y, fit(y, limit.rate_hz));
    const Series error = difference(out.velocity_m_s, truth.velocity_m_s);
    const double rms = root_mean_square(error);
    CHECK(rms < limit.share * root_mean_square(truth.velocity_m_s));
    Series central(y.size(), 0.0);
    for (std::size_t i = 1; i + 1 < y.size(); ++i) {
      central[i] = 0.5 * (y[i + 1] - y[i - 1]) * limit.rate_hz;
    }
    CHECK(rms < 0.85 * root_mean_square(difference(central, truth.velocity_m_s)));
    CHECK(root_mean_square(out.sigma_m_s) == Approx(rms).epsilon(0.25));
    std::size_t inside = 0;
    for (std::size_t i = 0; i < error.size(); ++i) {
      if (std::abs(error[i]) <= 1.645 * out.sigma_m_s[i]) ++inside;
    }
    CHECK(static_cast<double>(inside) > 0.85 * static_cast<double>(error.size()));
    // Where the hops need half of a slow log's band, half of the noise's power stays with them.
    CHECK(root_mean_square(difference(out.position_m, truth.travel_m)) <
          std::sqrt(0.5) * total_noise_counts(limit.noise_counts) * count_m);
  }
}

TEST_CASE("the velocity noise at rest is what a resting end shows", "[signal]") {
  const double rate_hz = 1000.0, rest_s = 40.0;
  const Truth truth = swing_with_hops(rate_hz, rest_s, 20.0);
  for (const double noise_counts : {0.6, 2.5}) {
    CAPTURE(noise_counts);
    const Series y = logged(truth.travel_m, noise_counts, 8);
    const signal::SmootherModel model = fit(y, rate_hz);
    const signal::Smoothed out = signal::smooth(y, model);
    const double shown = root_mean_square(out.velocity_m_s, 0, 39000);
    // Noise of 4 Hz bandwidth over 39 s has about 300 degrees of freedom: 4 %, three times that.
    CHECK(model.rest_velocity_noise_m_s == Approx(shown).epsilon(0.15));
  }
}

TEST_CASE("a channel that is silent at rest has no noise there and counts in motion", "[signal]") {
  const Truth truth = swing_with_hops(1000.0, 30.0, 20.0);
  const Series y = logged(truth.travel_m, 0.0, 1);
  const signal::SmootherModel model = fit(y, 1000.0);
  CHECK(model.noise_m == Approx(count_m / std::sqrt(12.0)).epsilon(0.1));
  CHECK(model.rest_velocity_noise_m_s < 0.2 * count_m / std::sqrt(12.0));
  const signal::Smoothed out = signal::smooth(y, model);
  CHECK(root_mean_square(out.velocity_m_s, 0, 28000) < 1e-9);
}

TEST_CASE("constants and straight lines come back as they are", "[signal]") {
  for (const std::size_t n : {9u, 10u, 20u, 500u, 40000u}) {
    Series level(n, 0.05), line(n);
    for (std::size_t i = 0; i < n; ++i) line[i] = 0.01 + 1e-6 * static_cast<double>(i);
    const signal::SmootherModel model = fit(logged(Series(5000, 0.05), 0.6, 2), 1000.0);
    const signal::Smoothed still = signal::smooth(level, model);
    const signal::Smoothed moving = signal::smooth(line, model);
    for (std::size_t i = 0; i < n; ++i) {
      // Single precision, whose last place is 4 nm at 0.05 m, and so the slopes it makes at 1 kHz.
      REQUIRE(still.position_m[i] == Approx(0.05).margin(8e-9));
      REQUIRE(std::abs(still.velocity_m_s[i]) < 1e-9);
      REQUIRE(moving.velocity_m_s[i] == Approx(1e-3).margin(2e-5));
      REQUIRE(moving.position_m[i] == Approx(line[i]).margin(2e-8));
    }
  }
}

TEST_CASE("a log without any noise keeps every motion below the bank's top", "[signal]") {
  const double rate_hz = 1000.0;
  const signal::SmootherModel silent{.rate_hz = rate_hz, .noise_m = 0.0, .memory_s = 0.033};
  Series x, v;
  for (int i = 0; i < 8000; ++i) {
    const double w = 2.0 * pi * 20.0;
    x.push_back(0.05 + 0.02 * std::sin(w * i / rate_hz));
    v.push_back(0.02 * w * std::cos(w * i / rate_hz));
  }
  const signal::Smoothed out = signal::smooth(x, silent);
  // Away from the ends the gain at 20 Hz is 1 - (20/300)^6.
  const Series error = difference(out.velocity_m_s, v);
  CHECK(root_mean_square(error, 1000, 7000) < 1e-5 * root_mean_square(v));
}

TEST_CASE("scale and sign of the readings are those of the result", "[signal]") {
  const Truth truth = swing_with_hops(500.0, 2.0, 20.0);
  const Series y = logged(truth.travel_m, 0.6, 4);
  const signal::Smoothed out = signal::smooth(y, fit(y, 500.0));
  for (const double factor : {-1.0, 3.0}) {
    Series scaled = y;
    for (double& value : scaled) value *= factor;
    const signal::Smoothed other = signal::smooth(scaled, fit(scaled, 500.0));
    for (std::size_t i = 0; i < y.size(); i += 7) {
      REQUIRE(other.velocity_m_s[i] ==
              Approx(factor * out.velocity_m_s[i]).margin(4e-5).epsilon(1e-4));
      REQUIRE(other.sigma_m_s[i] == Approx(std::abs(factor) * out.sigma_m_s[i]).epsilon(5e-3));
    }
  }
}

TEST_CASE("time reversed, travel and sigma are reversed and velocity changes sign", "[signal]") {
  const Truth truth = swing_with_hops(1000.0, 5.0, 40.0);  // several chunks
  const Series y = logged(truth.travel_m, 0.6, 5);
  const signal::Smoothed forward = signal::smooth(y, fit(y, 1000.0));
  const Series turned = reversed(y);
  const signal::Smoothed backward = signal::smooth(turned, fit(turned, 1000.0));
  const std::size_t n = y.size();
  for (std::size_t i = 0; i < n; i += 5) {
    // The noise is read from blocks counted from the first reading: a per cent at most.
    REQUIRE(std::abs(forward.position_m[i] - backward.position_m[n - 1 - i]) < 0.05 * count_m);
    REQUIRE(std::abs(forward.velocity_m_s[i] + backward.velocity_m_s[n - 1 - i]) <
            0.2 * forward.sigma_m_s[i] + single_precision_m_s);
  }
  SECTION("to rounding, with one model") {
    const signal::SmootherModel model = fit(y, 1000.0);
    const signal::Smoothed again = signal::smooth(turned, model);
    for (std::size_t i = 0; i < n; i += 5) {
      REQUIRE(std::abs(forward.velocity_m_s[i] + again.velocity_m_s[n - 1 - i]) <
              0.01 * forward.sigma_m_s[i] + single_precision_m_s);
    }
  }
}

TEST_CASE("a longer log gives the same values away from the cut", "[signal]") {
  const Truth truth = swing_with_hops(1000.0, 5.0, 50.0);
  const Series y = logged(truth.travel_m, 0.6, 6);
  const signal::SmootherModel model = fit(y, 1000.0);
  const signal::Smoothed whole = signal::smooth(y, model);
  const std::size_t first = 7001, count = 30000, away = 3000;
  const signal::Smoothed part = signal::smooth(std::span(y).subspan(first, count), model);
  for (std::size_t i = away; i < count - away; i += 3) {
    REQUIRE(std::abs(part.velocity_m_s[i] - whole.velocity_m_s[first + i]) <
            0.01 * whole.sigma_m_s[first + i]);
  }
}

TEST_CASE("stretches too short for a velocity are refused, all others work", "[signal]") {
  const signal::SmootherModel model = fit(logged(Series(5000, 0.05), 0.6, 2), 1000.0);
  for (std::size_t n = 0; n <= 20; ++n) {
    Series y(n);
    for (std::size_t i = 0; i < n; ++i) y[i] = 0.05 + 0.001 * static_cast<double>(i % 3);
    if (n < signal::shortest_stretch(model)) {
      CHECK_THROWS_AS(signal::smooth(y, model), std::invalid_argument);
      continue;
    }
    const signal::Smoothed out = signal::smooth(y, model);
    REQUIRE(out.velocity_m_s.size() == n);
    for (std::size_t i = 0; i < n; ++i) {
      CHECK(std::isfinite(out.position_m[i]));
      CHECK(std::isfinite(out.velocity_m_s[i]));
      CHECK(std::isfinite(out.sigma_m_s[i]));
    }
  }
}

TEST_CASE("a fixed span is the quadratic fit with its closed-form noise", "[signal]") {
  const Truth truth = swing_with_hops(1000.0, 2.0, 20.0);
  const Series y = logged(truth.travel_m, 0.6, 9);
  const signal::SmootherModel model = fit(y, 1000.0, {.fixed_span_s = 0.021});
  CHECK(model.span_samples == 21);
  CHECK(signal::shortest_stretch(model) == 21);
  const signal::Smoothed out = signal::smooth(y, model);
  const signal::SavitzkyGolay slope{21, 2, 1, 0.001};
  const Series expected = signal::filtered(slope, y);
  for (std::size_t i = 0; i < y.size(); i += 3) {
    REQUIRE(out.velocity_m_s[i] == Approx(expected[i]).margin(1e-12));
  }
  // Slope of a quadratic fit: sqrt(12 / (n (n^2 - 1))) a sample.
  const double gain = std::sqrt(12.0 / (21.0 * (21.0 * 21.0 - 1.0))) * 1000.0;
  CHECK(out.sigma_m_s[y.size() / 2] == Approx(model.noise_m * gain).epsilon(1e-9));
  CHECK(out.sigma_m_s[0] > out.sigma_m_s[y.size() / 2]);
  CHECK(model.rest_velocity_noise_m_s ==
        Approx(root_mean_square(out.velocity_m_s, 0, 1900)).epsilon(0.2));
  CHECK(out.cutoff_hz == Approx(1000.0 / 21.0).epsilon(0.5));
  CHECK(signal::describe(model).find("21 samples") != std::string::npos);
}

TEST_CASE("damaged readings and options without meaning are refused", "[signal]") {
  Series broken(100, 0.05);
  broken[50] = std::numeric_limits<double>::quiet_NaN();
  const Series y(100, 0.05);
  CHECK_THROWS_AS(fit(broken, 1000.0), std::invalid_argument);
  CHECK_THROWS_AS(signal::smooth(broken, fit(y, 1000.0)), std::invalid_argument);
  CHECK_THROWS_AS(fit(y, 0.0), std::invalid_argument);
  CHECK_THROWS_AS(fit(y, 1000.0, {.fixed_span_s = 0.0}), std::invalid_argument);
  CHECK_THROWS_AS(fit(y, 1000.0, {.fixed_span_s = 1.5}), std::invalid_argument);
  CHECK_THROWS_AS(fit(y, 1000.0, {.memory_s = -1.0}), std::invalid_argument);
  SECTION("no reading at all has no noise") {
    CHECK(signal::fit_smoother({}, 1000.0).noise_m == 0.0);
  }
}

TEST_CASE("two ends at once get what each gets alone", "[signal]") {
  const Truth truth = swing_with_hops(500.0, 2.0, 20.0);
  const Series front = logged(truth.travel_m, 0.6, 1), rear = logged(truth.travel_m, 2.5, 2);
  const signal::Smoothed front_alone = signal::smooth(front, fit(front, 500.0));
  const signal::Smoothed rear_alone = signal::smooth(rear, fit(rear, 500.0));
  signal::Smoothed front_beside;
  std::thread other([&] { front_beside = signal::smooth(front, fit(front, 500.0)); });
  const signal::Smoothed rear_beside = signal::smooth(rear, fit(rear, 500.0));
  other.join();
  CHECK(front_beside.velocity_m_s == front_alone.velocity_m_s);
  CHECK(rear_beside.velocity_m_s == rear_alone.velocity_m_s);
}
