#include "slide.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/signal/kalman.hpp"

namespace clickwise::motion {

namespace {

using State = Eigen::Vector3d;
using Belief = signal::Belief<3>;

constexpr int passes = 6;
constexpr int passes_that_find_ends = 3;
constexpr double first_sag_sigma = 0.18;  // of the stroke
constexpr double later_sag_sigma = 0.30;
constexpr double sag_memory_s = 0.3;  // the travel's own, so that samples are not independent
constexpr double pulled_m_s2 = -6.0;  // of the upper unit: only the top-out stop pulls so
constexpr double falling_m_s2 = 3.0;
constexpr double falling_s = 0.08;
constexpr double end_margin_m = 3e-3;
constexpr double end_sigma_m = 0.022;
constexpr double bias_walk = 1e-6;  // (m/s^2)^2/s

// The clips' wide variances (clip_rebuild.hpp) serve the estimate; against the truth of twenty
// invented rides they make sigma up to twice too wide (docs/accuracy.md).
double told_sigma_m_s(double variance) {
  constexpr double calm_scale = 1.0;
  constexpr double wide_m_s = 0.06;
  constexpr double most_narrowing = 2.2;
  const double sigma = std::sqrt(std::max(0.0, variance));
  return calm_scale * sigma / std::min(most_narrowing, 1.0 + sigma / wide_m_s);
}

enum class Place : std::uint8_t { inside, extended, compressed, topped_out, falling };

class SlideFilter {
public:
  SlideFilter(const Axial& axial, const Rebuilt& rebuilt, const SlideSettings& settings)
      : axial_(axial),
        rebuilt_(rebuilt),
        settings_(settings),
        map_(settings.spring_m_s2),
        places_(axial.upper_m_s2.size(), Place::inside) {
    find_contacts();
  }

  Slid run() {
    for (pass_ = 0; pass_ < passes; ++pass_) {
      smooth();
      if (pass_ < passes_that_find_ends) find_ends();
      if (pass_ + 1 < passes) learn();
    }
    return std::move(slid_);
  }

private:
  std::size_t samples() const { return places_.size(); }

  void find_contacts() {
    const auto longest = static_cast<std::size_t>(falling_s / settings_.interval_s);
    std::size_t fallen = 0;
    for (std::size_t i = 0; i < samples(); ++i) {
      if (!axial_.usable[i]) {
        fallen = 0;
        continue;
      }
      const bool falls = std::abs(axial_.lower_m_s2[i]) < falling_m_s2 &&
                         std::abs(axial_.upper_m_s2[i]) < falling_m_s2;
      fallen = falls ? fallen + 1 : 0;
      if (fallen > longest) places_[i] = Place::falling;
      if (axial_.upper_m_s2[i] < pulled_m_s2) places_[i] = Place::topped_out;
    }
  }

  void find_ends() {
    for (std::size_t i = 0; i < samples(); ++i) {
      if (places_[i] == Place::topped_out || places_[i] == Place::falling) continue;
      places_[i] = slid_.travel_m[i] < -end_margin_m                       ? Place::extended
                   : slid_.travel_m[i] > settings_.stroke_m + end_margin_m ? Place::compressed
                                                                           : Place::inside;
    }
  }

  double held_travel_m(std::size_t i) const {
    return std::clamp(slid_.travel_m[i], 0.0, settings_.stroke_m);
  }

  void learn() {
    std::vector<double> travel(samples()), variance(samples());
    std::vector<std::uint8_t> use(samples());
    for (std::size_t i = 0; i < samples(); ++i) {
      travel[i] = held_travel_m(i);
      variance[i] = velocity_variance_[i];
      use[i] = axial_.usable[i] && places_[i] != Place::topped_out && axial_.clipped[i] != 2;
    }
    map_.fit(travel, slid_.velocity_m_s, variance, axial_.upper_m_s2, use);
  }

  void observe_place(std::size_t i, Belief& belief) const {
    const State travel = State::UnitX();
    switch (places_[i]) {
      case Place::inside:
        return;
      case Place::extended:
        signal::observe(belief, travel, 0.0, end_sigma_m * end_sigma_m);
        return;
      case Place::compressed:
        signal::observe(belief, travel, settings_.stroke_m, end_sigma_m * end_sigma_m);
        return;
      case Place::topped_out:
        signal::observe(belief, travel, 0.0, 4e-6);
        return;
      case Place::falling:
        signal::observe(belief, travel, 0.0, 1e-6);
        signal::observe(belief, State(State::UnitY()), 0.0, 1e-2);
        return;
    }
  }

  void observe_force(std::size_t i, Belief& belief) const {
    if (pass_ == 0 || places_[i] == Place::topped_out || !axial_.usable[i] ||
        axial_.clipped[i] == 2)
      return;
    const double x = held_travel_m(i);
    const double v = slid_.velocity_m_s[i];
    const ForceMap::Linear f = map_.at(x, v);
    signal::observe(belief, State(f.by_travel, f.by_velocity, 0.0),
                    axial_.upper_m_s2[i] - f.value + f.by_travel * x + f.by_velocity * v,
                    f.variance);
  }

  void observe_all(std::size_t i, Belief& belief) const {
    const double sag_sigma_m =
        (pass_ == 0 ? first_sag_sigma : later_sag_sigma) * settings_.stroke_m;
    const double independent = 2.0 * sag_memory_s / settings_.interval_s;
    signal::observe(belief, State(State::UnitX()), settings_.sag_m,
                    sag_sigma_m * sag_sigma_m * independent);
    observe_place(i, belief);
    observe_force(i, belief);
    if (!settings_.seen_travel_m.empty() && std::isfinite(settings_.seen_travel_m[i]))
      signal::observe(belief, State(State::UnitX()), settings_.seen_travel_m[i],
                      settings_.seen_variance_m2);
  }

  void smooth() {
    const double dt = settings_.interval_s;
    Eigen::Matrix3d transition = Eigen::Matrix3d::Identity();
    transition(0, 1) = dt;
    transition(0, 2) = -0.5 * dt * dt;
    transition(1, 2) = -dt;
    const State by_acceleration(0.5 * dt * dt, dt, 0.0);
    signal::Smoother<3> smoother(transition, samples());
    Belief belief;
    belief.mean = State(settings_.sag_m, 0.0, 0.0);
    belief.covariance = State(std::pow(0.25 * settings_.stroke_m, 2), 1.0, 1.0).asDiagonal();
    for (std::size_t i = 0; i < samples(); ++i) {
      if (i > 0) {
        const double a = 0.5 * (rebuilt_.relative_m_s2[i] + rebuilt_.relative_m_s2[i - 1]);
        const double variance = 0.5 * (rebuilt_.variance[i] + rebuilt_.variance[i - 1]);
        Eigen::Matrix3d noise = variance * by_acceleration * by_acceleration.transpose();
        noise(2, 2) += bias_walk * dt;
        belief = smoother.predict(belief, by_acceleration * a, noise);
      }
      const Belief predicted = belief;
      observe_all(i, belief);
      smoother.keep(predicted, belief);
    }
    take(std::move(smoother).smoothed());
  }

  void take(const std::vector<Belief>& beliefs) {
    for (auto* series :
         {&slid_.travel_m, &slid_.velocity_m_s, &slid_.travel_sigma_m, &slid_.velocity_sigma_m_s})
      series->resize(samples());
    velocity_variance_.resize(samples());
    for (std::size_t i = 0; i < samples(); ++i) {
      slid_.travel_m[i] = beliefs[i].mean[0];
      slid_.velocity_m_s[i] = beliefs[i].mean[1];
      velocity_variance_[i] = std::max(0.0, beliefs[i].covariance(1, 1));
      slid_.travel_sigma_m[i] = std::sqrt(std::max(0.0, beliefs[i].covariance(0, 0)));
      slid_.velocity_sigma_m_s[i] = told_sigma_m_s(beliefs[i].covariance(1, 1));
    }
  }

  const Axial& axial_;
  const Rebuilt& rebuilt_;
  const SlideSettings& settings_;
  ForceMap map_;
  std::vector<Place> places_;
  Slid slid_;
  std::vector<double> velocity_variance_;
  int pass_ = 0;
};

}  // namespace

Slid slide(const Axial& axial, const Rebuilt& rebuilt, const SlideSettings& settings) {
  return SlideFilter(axial, rebuilt, settings).run();
}

}  // namespace clickwise::motion
