// One end of a ride reviewed, up to but without the advice.
#pragma once

#include <optional>

#include "clickwise/advice/end_ride.hpp"
#include "clickwise/workflow/review.hpp"

namespace clickwise::workflow {

// The end's damper; empty when the bike file has none. Throws core::JobError when it has one that
// cannot be laid out.
std::optional<damper::Damper> damper_of(const bike::Bike& bike, bike::EndName name);

struct ChosenSplit {
  double speed_m_s;
  SplitSource source;
};

struct ChosenSplits {
  ChosenSplit compression;
  ChosenSplit rebound;
};

// What was asked for, else what the bike file says, else the knee of the damper's curve, else a
// default.
ChosenSplits choose_splits(const bike::End& end, const bike::Split& asked,
                           const std::optional<damper::Damper>& damper);

EndReview review_end(const bike::Bike& bike, const RideEnd& ride, const bike::Split& asked,
                     const std::optional<damper::Damper>& damper);

// Of both ends together, or of the one that was logged.
std::vector<run::Airtime> airtimes_of(const Ride& ride);

// The view of it that the advice takes; points into its arguments.
advice::EndRide advice_view(const bike::Bike& bike, const RideEnd& ride, const EndReview& review,
                            const std::optional<damper::Damper>& damper);

// The end as the replay needs it, or why the bike file knows too little for it.
void add_vehicle(advice::EndRide& view);

}  // namespace clickwise::workflow
