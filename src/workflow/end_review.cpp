#include "end_review.hpp"

#include <cmath>

#include "clickwise/core/units.hpp"
#include "clickwise/events/airtime.hpp"
#include "clickwise/events/end_stops.hpp"
#include "clickwise/events/hit_trains.hpp"

namespace clickwise::workflow {

namespace {

// Where nothing is known of the damper; a choice, not a standard: no published value exists.
constexpr double fallback_split_m_s = 0.5;
// A knee outside these is no use as a split (a platform has its knee at 0).
constexpr double least_knee_m_s = 0.05;
constexpr double most_knee_m_s = 3.0;

ChosenSplit choose_split(const std::optional<double>& asked, const std::optional<double>& in_file,
                         const std::optional<double>& knee_m_s) {
  if (asked) return {*asked, SplitSource::asked};
  if (in_file) return {*in_file, SplitSource::bike_file};
  if (knee_m_s && *knee_m_s >= least_knee_m_s && *knee_m_s <= most_knee_m_s)
    return {*knee_m_s, SplitSource::knee};
  return {fallback_split_m_s, SplitSource::fallback};
}

// The sprung share as felt at the shaft near the end of the stroke, kg; 0 when not known.
double moving_mass_kg(const bike::Bike& bike, const bike::End& end, bike::EndName name,
                      double travel_m) {
  const double ratio = end.ratio(travel_m);
  return bike.sprung_mass_kg(name).value_or(0.0) * ratio * ratio;
}

damper::RideDensity density_of(const bands::VelocityBands& bands) {
  return {bands.density.compression, bands.density.rebound};
}

std::vector<AdjusterReview> review_adjusters(const damper::Damper& damper,
                                             const bands::VelocityBands& bands) {
  std::vector<AdjusterReview> adjusters;
  for (const damper::AdjusterRange& range : damper.adjusters()) {
    const double split_m_s = bike::acts_in_compression(range.adjuster) ? bands.compression.split_m_s
                                                                       : bands.rebound.split_m_s;
    adjusters.push_back(
        {range, damper::reach(damper, range.adjuster, density_of(bands), split_m_s)});
  }
  return adjusters;
}

// Nothing without the accelerometer, or without the spring and masses that its reading is held
// against.
std::optional<sim::ApparentDamper> apparent_of(const bike::Bike& bike, const RideEnd& ride,
                                               const std::optional<damper::Damper>& damper) {
  if (ride.felt_m_s2.empty()) return std::nullopt;
  const auto curve = damper ? std::optional(damper->curve()) : std::nullopt;
  const auto end = sim::ApparentEnd::from(bike, ride.name, curve);
  if (!end) return std::nullopt;
  const run::Motion& motion = ride.motion;
  return sim::apparent_damper(*end, {.interval_s = motion.time.interval_s(),
                                     .travel_m = motion.travel_m,
                                     .velocity_m_s = motion.velocity_m_s,
                                     .felt_m_s2 = ride.felt_m_s2,
                                     .counted = ride.counted,
                                     .velocity_noise_m_s = motion.velocity_noise_m_s,
                                     .cutoff_hz = motion.cutoff_hz});
}

// Everything that hangs on travel.
void review_travel(const bike::Bike& bike, const RideEnd& ride, EndReview& review) {
  const bike::End& end = *bike.end(ride.name);
  const run::Motion& motion = ride.motion;
  review.travel = bands::travel_use(motion, ride.counted, end.stroke_m);
  review.bottom_outs = events::bottom_outs(
      motion, ride.counted,
      {end.stroke_m, end.bottom_out_within_m, moving_mass_kg(bike, end, ride.name, end.stroke_m)});
  events::TopOutOptions top_out;
  top_out.moving_mass_kg = moving_mass_kg(bike, end, ride.name, 0.0);
  review.top_outs = events::top_outs(motion, ride.counted, top_out);
  events::HitTrainOptions train;
  train.stroke_m = end.stroke_m;
  review.trains = events::hit_trains(motion, ride.counted, train);
}

}  // namespace

std::optional<damper::Damper> damper_of(const bike::Bike& bike, bike::EndName name) {
  if (!bike.end(name)->damper) return std::nullopt;
  return damper::Damper::from(*bike.end(name), bike.sprung_mass_kg(name), {bike.file});
}

ChosenSplits choose_splits(const bike::End& end, const bike::Split& asked,
                           const std::optional<damper::Damper>& damper) {
  std::optional<double> compression_knee;
  std::optional<double> rebound_knee;
  if (damper) {
    compression_knee = damper->curve().compression.knee_m_s();
    rebound_knee = damper->curve().rebound.knee_m_s();
  }
  return {choose_split(asked.compression_m_s, end.split.compression_m_s, compression_knee),
          choose_split(asked.rebound_m_s, end.split.rebound_m_s, rebound_knee)};
}

EndReview review_end(const bike::Bike& bike, const RideEnd& ride, const bike::Split& asked,
                     const std::optional<damper::Damper>& damper) {
  const bike::End& end = *bike.end(ride.name);
  const run::Motion& motion = ride.motion;
  bands::ForceCurve force_n;
  if (damper)
    force_n = [curve = damper->curve()](double velocity_m_s) {
      return curve.force_n(velocity_m_s);
    };
  const auto [compression, rebound] = choose_splits(end, asked, damper);

  EndReview review;
  review.name = ride.name;
  review.source = motion.source;
  review.stroke_m = end.stroke_m;
  review.riding_s = ride.riding_s;
  review.velocity_noise_m_s = motion.velocity_noise_m_s;
  review.cutoff_hz = motion.cutoff_hz;
  review.smoothing = motion.smoothing;
  review.bands = bands::velocity_bands(motion, ride.counted,
                                       {compression.speed_m_s, rebound.speed_m_s}, force_n);
  review.compression_split_source = compression.source;
  review.rebound_split_source = rebound.source;
  if (damper) {
    review.adjusters = review_adjusters(*damper, review.bands);
    review.damper_assumed = damper->assumed();
  }
  review.travel_withheld = motion.travel_withheld;
  if (!motion.travel_known) return review;
  review_travel(bike, ride, review);
  review.apparent = apparent_of(bike, ride, damper);
  return review;
}

std::vector<run::Airtime> airtimes_of(const Ride& ride) {
  std::vector<events::AirtimeEnd> ends;
  for (const RideEnd& end : ride.ends)
    if (end.motion.travel_known) ends.push_back({&end.motion, end.counted});
  if (ends.empty()) return {};
  return events::airtimes(ends);
}

advice::EndRide advice_view(const bike::Bike& bike, const RideEnd& ride, const EndReview& review,
                            const std::optional<damper::Damper>& damper) {
  advice::EndRide view;
  view.name = ride.name;
  view.end = &*bike.end(ride.name);
  view.motion = &ride.motion;
  view.counted = &ride.counted;
  view.bottom_outs = &review.bottom_outs;
  view.top_outs = &review.top_outs;
  view.trains = &review.trains;
  view.damper = damper ? &*damper : nullptr;
  view.sprung_mass_kg = bike.sprung_mass_kg(ride.name);
  view.compression_split_m_s = review.bands.compression.split_m_s;
  view.rebound_split_m_s = review.bands.rebound.split_m_s;
  return view;
}

void add_vehicle(advice::EndRide& view) {
  try {
    view.vehicle = sim::VehicleEnd::from(*view.bike, view.name);
  } catch (const core::JobError& error) {
    view.no_vehicle = error.what();
  }
}

}  // namespace clickwise::workflow
