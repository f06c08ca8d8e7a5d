// Published worked examples of the filter and smoother, and series whose answer is known.
#include "clickwise/signal/kalman.hpp"

#include <catch2/catch.hpp>

using namespace clickwise;

namespace {

using Number = Eigen::Matrix<double, 1, 1>;

struct Level {
  double mean, variance;
};

struct Run {
  std::vector<Level> filtered, smoothed;
  std::vector<double> log_density;
};

// Random walk (variance q a step) seen with noise r; the first step is taken before the first value
// where `step_first` says so.
Run local_level(const std::vector<double>& y, double q, double r, Level prior, bool step_first) {
  const Number one = Number::Ones();
  signal::Smoother<1> smoother(one, y.size());
  signal::Belief<1> belief{Number(prior.mean), Number(prior.variance)};
  Run run;
  for (std::size_t i = 0; i < y.size(); ++i) {
    if (i > 0 || step_first) belief = smoother.predict(belief, Number::Zero(), Number(q));
    const auto predicted = belief;
    run.log_density.push_back(signal::observe(belief, one, y[i], r));
    smoother.keep(predicted, belief);
    run.filtered.push_back({belief.mean[0], belief.covariance(0, 0)});
  }
  for (const auto& b : std::move(smoother).smoothed())
    run.smoothed.push_back({b.mean[0], b.covariance(0, 0)});
  return run;
}

// Annual flow of the Nile at Aswan, 1871 to 1970, 1e8 m^3: R package datasets, public domain.
const std::vector<double> nile{
    1120, 1160, 963, 1210, 1160, 1160, 813,  1230, 1370, 1140, 995,  935,  1110, 994,  1020,
    960,  1180, 799, 958,  1140, 1100, 1210, 1150, 1250, 1260, 1220, 1030, 1100, 774,  840,
    874,  694,  940, 833,  701,  916,  692,  1020, 1050, 969,  831,  726,  456,  824,  702,
    1120, 1100, 832, 764,  821,  768,  845,  864,  862,  698,  845,  744,  796,  1040, 759,
    781,  865,  845, 944,  984,  897,  822,  1010, 771,  676,  649,  846,  812,  742,  801,
    1040, 860,  874, 848,  890,  744,  749,  838,  1050, 918,  986,  797,  923,  975,  815,
    1020, 906,  901, 1170, 912,  746,  919,  718,  714,  740};

}  // namespace

// Hand fractions, equal to batch least squares (check-values 8l); the algorithm: Rauch, Tung and
// Striebel, AIAA J. 3:1445-1450 (1965).
TEST_CASE("three readings are filtered and smoothed to their fractions", "[signal][kalman]") {
  const Run run = local_level({1, 2, 3}, 1.0, 1.0, {0.0, 1.0}, true);
  const std::vector<Level> filtered{{2.0 / 3, 2.0 / 3}, {3.0 / 2, 5.0 / 8}, {17.0 / 7, 13.0 / 21}};
  const std::vector<Level> smoothed{
      {8.0 / 7, 10.0 / 21}, {13.0 / 7, 10.0 / 21}, {17.0 / 7, 13.0 / 21}};
  for (std::size_t i = 0; i < 3; ++i) {
    CHECK(run.filtered[i].mean == Approx(filtered[i].mean).margin(1e-12));
    CHECK(run.filtered[i].variance == Approx(filtered[i].variance).margin(1e-12));
    CHECK(run.smoothed[i].mean == Approx(smoothed[i].mean).margin(1e-12));
    CHECK(run.smoothed[i].variance == Approx(smoothed[i].variance).margin(1e-12));
  }
}

// Riccati closed form (check-values 8m).
TEST_CASE("a long run settles at the steady variances", "[signal][kalman]") {
  const Run run = local_level(std::vector<double>(400, 0.0), 1.0, 1.0, {0.0, 1.0}, true);
  CHECK(run.filtered[200].variance == Approx(0.6180339887).epsilon(1e-9));
  CHECK(run.filtered[200].variance + 1.0 == Approx(1.6180339887).epsilon(1e-9));
  CHECK(run.smoothed[200].variance == Approx(0.4472135955).epsilon(1e-9));
}

// J. Durbin and S. J. Koopman, Time Series Analysis by State Space Methods (2012), chapter 2: the
// variances; results: check-values 8n. A diffuse start is a variance of 1e12 (error below 1e-5).
TEST_CASE("the Nile series gives the published level", "[signal][kalman]") {
  REQUIRE(nile.size() == 100);
  const Run run = local_level(nile, 1469.1, 15099.0, {0.0, 1e12}, false);
  CHECK(run.filtered[1].mean == Approx(1140.9278399).margin(2e-5));
  CHECK(run.filtered[99].mean == Approx(798.3702926).margin(1e-5));
  CHECK(run.filtered[99].variance == Approx(4032.1579418).margin(1e-3));
  CHECK(run.smoothed[0].mean == Approx(1111.6683191).margin(2e-4));
  CHECK(run.smoothed[49].mean == Approx(834.7632591).margin(1e-5));
  CHECK(run.smoothed[49].variance == Approx(2326.7568698).margin(1e-3));
  double sum = 0.0;
  for (std::size_t i = 1; i < run.log_density.size(); ++i) sum += run.log_density[i];
  CHECK(sum == Approx(-632.5456251).margin(1e-5));
}
