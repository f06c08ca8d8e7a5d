#include "clickwise/workflow/import_run.hpp"

#include <fmt/chrono.h>

#include <chrono>
#include <filesystem>

#include "archived_ride.hpp"
#include "end_review.hpp"

namespace clickwise::workflow {

namespace {

// RFC 3339 section 5.6, in UTC.
std::string now_words() {
  const auto now = std::chrono::system_clock::to_time_t(std::chrono::system_clock::now());
  return fmt::format("{:%Y-%m-%dT%H:%M:%SZ}", fmt::gmtime(now));
}

archive::Events events_of(const Ride& ride) {
  archive::Events events;
  for (const RideEnd& end : ride.ends) {
    EndReview review = review_end(ride.bike, end, {}, std::nullopt);
    (end.name == bike::EndName::front ? events.front : events.rear) = {
        std::move(review.bottom_outs), std::move(review.top_outs), std::move(review.trains)};
  }
  events.airtimes = airtimes_of(ride);
  return events;
}

}  // namespace

Import import_run(const ImportOptions& options) {
  const Ride ride = load_ride(options.ride);
  archive::Run run = run_of(ride);
  run.created = now_words();
  run.program = options.program;
  archive::write_archive(options.archive_path, run, events_of(ride));
  Import result{options.archive_path,
                std::filesystem::file_size(options.archive_path),
                ride.log,
                {},
                ride.notes};
  for (const RideEnd& end : ride.ends) result.ends.push_back(end.name);
  return result;
}

}  // namespace clickwise::workflow
