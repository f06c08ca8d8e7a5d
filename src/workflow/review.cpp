#include "clickwise/workflow/review.hpp"

#include <fmt/format.h>

#include "clickwise/bike/bike_file.hpp"
#include "clickwise/core/parallel.hpp"
#include "end_review.hpp"

namespace clickwise::workflow {

namespace {

// p95 speeds are compared at the wheel, each by the ratio at its mean travel.
double wheel_p95_ratio(const bike::Bike& bike, const EndReview& front, const EndReview& rear,
                       const bands::Band& front_band, const bands::Band& rear_band) {
  return front_band.p95_m_s * bike.front->ratio(front.travel.mean_m) /
         (rear_band.p95_m_s * bike.rear->ratio(rear.travel.mean_m));
}

FrontRear front_beside_rear(const Ride& ride, const std::vector<EndReview>& ends) {
  const EndReview& front = ends[0];
  const EndReview& rear = ends[1];
  FrontRear both;
  both.mean_travel_difference =
      front.travel.mean_m / front.stroke_m - rear.travel.mean_m / rear.stroke_m;
  both.compression_p95_ratio =
      wheel_p95_ratio(ride.bike, front, rear, front.bands.compression, rear.bands.compression);
  both.rebound_p95_ratio =
      wheel_p95_ratio(ride.bike, front, rear, front.bands.rebound, rear.bands.rebound);
  return both;
}

}  // namespace

Review review(const ReviewOptions& options) {
  const Ride ride = load_ride(options.ride);
  std::vector<std::optional<damper::Damper>> dampers;
  for (const RideEnd& end : ride.ends) dampers.push_back(damper_of(ride.bike, end.name));

  Review result;
  result.bike_name = ride.bike.name;
  result.log = ride.log;
  result.notes = ride.notes;
  result.ends.resize(ride.ends.size());
  core::parallel_for(ride.ends.size(), [&](std::size_t i) {
    result.ends[i] =
        review_end(ride.bike, ride.ends[i], options.splits.end(ride.ends[i].name), dampers[i]);
  });
  for (const EndReview& end : result.ends)
    if (end.apparent && !end.apparent->problem.empty())
      result.notes.push_back(
          fmt::format("{} from the ride alone: {}", bike::part(end.name), end.apparent->problem));
  result.hand_arm = ride.hand_arm;
  result.airtimes = airtimes_of(ride);
  if (ride.ends.size() == 2 && ride.ends[0].riding_s > 0.0 && ride.ends[1].riding_s > 0.0 &&
      ride.ends[0].motion.travel_known && ride.ends[1].motion.travel_known)
    result.front_rear = front_beside_rear(ride, result.ends);

  std::vector<advice::EndRide> views;
  for (std::size_t i = 0; i < ride.ends.size(); ++i) {
    if (!ride.ends[i].motion.travel_known) continue;
    views.push_back(advice_view(ride.bike, ride.ends[i], result.ends[i], dampers[i]));
    views.back().airtimes = &result.airtimes;
    views.back().bike = &ride.bike;
    add_vehicle(views.back());
  }
  advice::AdviceOptions advice_options;
  advice_options.by_rule = options.advice_by_rule;
  if (!views.empty()) result.advice = advice::advise(views, ride.bike.aims, advice_options);
  if (views.empty())
    result.advice.leave_it =
        "no end's travel is known well enough to advise a click: put a potentiometer beside the "
        "units";
  result.missing = bike::what_is_missing(ride.bike);
  return result;
}

}  // namespace clickwise::workflow
