#include "clickwise/sim/replay.hpp"

#include <catch2/catch.hpp>

#include "clickwise/core/errors.hpp"
#include "replay_score.hpp"

using namespace clickwise;
using namespace clickwise::sim;
using namespace clickwise::replay_rides;

namespace {

ReplayInput input_of(const Case& made, const std::vector<std::uint8_t>& valid) {
  return {.end = made.ride.parts.vehicle(),
          .interval_s = 1e-3,
          .travel_m = made.log.travel_m,
          .velocity_m_s = made.log.velocity_m_s,
          .valid = valid,
          .counted = valid,
          .split_m_s = {made.split_m_s, made.split_m_s},
          .bottom_out_within_m = made.ride.parts.end.bottom_out_within_m};
}

const Case& a_case() {
  static const Case made = case_number(5, 8, 20.0);
  return made;
}

}  // namespace

// A small, seeded edition of the table in docs/accuracy.md (tests/benchmarks/replay_accuracy.cpp).
// The limits are issue 3's: 25 % for shares, 45 % for p95, 12 % for mean travel, signs 95 %. Bounds
// of 90 % over 54 changes that hang together in 6 rides: at least 80 % here.
TEST_CASE("changes on the same ground are predicted from the noisy log alone", "[sim][replay]") {
  Score score;
  for (int number = 0; number < 6; ++number) {
    const auto result = score_case(case_number(number, 31, 25.0), {}, score);
    CHECK(result.travel_rms_m < 1.5e-3);
    CHECK(result.carried_share == Approx(1.0).margin(0.03));
  }
  const auto& row = [&](Metric metric) { return score.rows[static_cast<std::size_t>(metric)]; };
  CHECK(row(Metric::compression_high_share).relative_error() < 0.25);
  CHECK(row(Metric::rebound_high_share).relative_error() < 0.25);
  CHECK(row(Metric::compression_p95).relative_error() < 0.45);
  CHECK(row(Metric::rebound_p95).relative_error() < 0.45);
  CHECK(row(Metric::travel_mean).relative_error() < 0.12);
  for (const Metric metric : {Metric::compression_high_share, Metric::rebound_high_share,
                              Metric::compression_p95, Metric::rebound_p95, Metric::travel_mean}) {
    REQUIRE(row(metric).mattering > 10);
    CHECK(row(metric).sign_share() >= 0.95);
    CHECK(row(metric).coverage() >= 0.80);
  }
}

TEST_CASE("the settings of the ride change nothing", "[sim][replay]") {
  const std::vector<std::uint8_t> all(a_case().log.travel_m.size(), 1);
  const auto input = input_of(a_case(), all);
  const auto result = replay(input, std::vector{input.end});
  for (const Change& change : result.predictions[0].changes) {
    CHECK(change.change == 0.0);
    CHECK(change.then == change.now);
    CHECK(change.falls_share == 0.5);
    CHECK(change.low <= 0.0);
    CHECK(change.high >= 0.0);
  }
}

TEST_CASE("the same seed gives the same answer, another seed another ensemble", "[sim][replay]") {
  const std::vector<std::uint8_t> all(a_case().log.travel_m.size(), 1);
  const auto input = input_of(a_case(), all);
  const std::vector<VehicleEnd> softer{a_case().settings[2].vehicle()};
  ReplayOptions options;
  const auto a = replay(input, softer, options);
  const auto b = replay(input, softer, options);
  options.ensemble.seed = 7;
  const auto c = replay(input, softer, options);
  CHECK(a.seed == ReplayOptions{}.ensemble.seed);
  CHECK(c.seed == 7);
  const auto& change = [](const ReplayResult& r) {
    return r.predictions[0].change(Metric::compression_high_share);
  };
  CHECK(change(a).low == change(b).low);
  CHECK(change(a).change == change(b).change);
  CHECK(change(a).low != change(c).low);
  CHECK(change(a).run_low <= change(a).low);
  CHECK(change(a).run_high >= change(a).high);
}

TEST_CASE("a gap splits the ride; what it holds is neither read nor counted", "[sim][replay]") {
  Case made = a_case();
  std::vector<std::uint8_t> valid(made.log.travel_m.size(), 1);
  for (std::size_t i = 8000; i < 8300; ++i) {
    valid[i] = 0;
    made.log.travel_m[i] = made.log.velocity_m_s[i] = NAN;
  }
  const auto input = input_of(made, valid);
  const auto result = replay(input, std::vector{made.settings[2].vehicle()});
  const double seconds = 1e-3 * static_cast<double>(valid.size()) - 0.3 - 2.0 * 0.5;
  CHECK(result.replayed_s == Approx(seconds).margin(2e-3));
  CHECK(result.modelled.seconds == Approx(result.recorded.seconds));
  for (const Change& change : result.predictions[0].changes) CHECK(std::isfinite(change.then));
  CHECK(result.travel_rms_m < 1.5e-3);
}

// The bike as written rides it all either way; the draws' part is an estimate of the same spread.
TEST_CASE("on a long ride the draws ride a part and agree with riding it all", "[sim][replay]") {
  const Case made = case_number(5, 8, 65.0);
  const std::vector<std::uint8_t> all(made.log.travel_m.size(), 1);
  const auto input = input_of(made, all);
  const std::vector<VehicleEnd> softer{made.settings[2].vehicle()};
  const auto whole = replay(input, softer);
  ReplayOptions options;
  options.longest_ensemble_s = 25.0;
  const auto pieces = replay(input, softer, options);
  for (const Metric metric : {Metric::compression_high_share, Metric::compression_high_j,
                              Metric::rebound_p95, Metric::travel_mean}) {
    const Change& a = whole.predictions[0].change(metric);
    const Change& b = pieces.predictions[0].change(metric);
    CHECK(a.now == b.now);
    CHECK(b.change >= a.low);
    CHECK(b.change <= a.high);
    CHECK(b.high - b.low != a.high - a.low);
    CHECK((b.high - b.low) / (a.high - a.low) == Approx(1.0).margin(0.6));
  }
}

TEST_CASE("a ride without a stretch worth riding is refused with a remedy", "[sim][replay]") {
  std::vector<std::uint8_t> valid(a_case().log.travel_m.size(), 0);
  std::fill_n(valid.begin(), 1500, std::uint8_t{1});
  const auto input = input_of(a_case(), valid);
  CHECK_THROWS_AS(replay(input, std::vector{input.end}), core::JobError);
}

// On the long mean the wheel force carries the sprung weight, whatever the mass is said to be.
TEST_CASE("a mass that cannot be right shows in what the wheel carries", "[sim][replay]") {
  const std::vector<std::uint8_t> all(a_case().log.travel_m.size(), 1);
  auto input = input_of(a_case(), all);
  input.end.sprung_mass_kg *= 0.7;
  const auto result = replay(input, {});
  CHECK(result.carried_share == Approx(1.0 / 0.7).epsilon(0.03));
}

TEST_CASE("the ensemble holds the bike as written first and covers every range", "[sim][replay]") {
  EnsembleOptions options;
  options.draws = 21;
  const auto draws = draw_ensemble(options, 0.05);
  REQUIRE(draws.size() == 21);
  CHECK(draws[0].sprung_mass == 1.0);
  CHECK(draws[0].friction == 1.0);
  std::vector<int> strata(20, 0);
  for (std::size_t i = 1; i < draws.size(); ++i)
    ++strata[static_cast<std::size_t>((draws[i].sprung_mass - 0.9) / 0.2 * 20.0)];
  for (const int count : strata) CHECK(count == 1);
  for (const double share : {0.02, 0.25}) {
    double widest = 0.0;
    for (const Draw& draw : draw_ensemble(options, share))
      widest = std::max(widest, std::abs(draw.damper[0] - 1.0));
    CHECK(widest > 0.8 * share);  // one of 20 strata lies beyond 0.9
    CHECK(widest <= share);
  }
}

TEST_CASE("a drawn damper's force is its factor times the force", "[sim][replay]") {
  const VehicleEnd end = a_case().ride.parts.vehicle();
  Draw draw;
  draw.damper = {1.2, 0.8};
  const VehicleEnd other = drawn(end, draw);
  for (const double v : {0.05, 0.3, 2.0}) {
    CHECK(other.curve.force_n(v) == Approx(1.2 * end.curve.force_n(v)));
    CHECK(other.curve.force_n(-v) == Approx(0.8 * end.curve.force_n(-v)));
  }
}
