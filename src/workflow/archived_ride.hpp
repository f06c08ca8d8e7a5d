// A ride from an archive, and into one.
#pragma once

#include "clickwise/archive/run_archive.hpp"
#include "clickwise/workflow/ride.hpp"

namespace clickwise::workflow {

// Throws core::InputError as load_ride does; core::JobError when the archive has no end of the
// bike.
Ride ride_of_archive(const RideOptions& options);

// The ride as an archive keeps it; the events are the caller's.
archive::Run run_of(const Ride& ride);

// Sets the riding seconds, and what counts on each end, by ride.riding.
void count_riding(Ride& ride);

}  // namespace clickwise::workflow
