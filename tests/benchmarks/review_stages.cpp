// Where a review's time goes: each stage timed on one log, best of several runs, one line a stage.
// Stages run one after the other, as the program runs them; ends run side by side where it does so.
#include <fmt/format.h>

#include <chrono>
#include <functional>
#include <string>
#include <vector>

#include "clickwise/bands/travel.hpp"
#include "clickwise/bands/velocity.hpp"
#include "clickwise/bike/bike_file.hpp"
#include "clickwise/events/airtime.hpp"
#include "clickwise/events/end_stops.hpp"
#include "clickwise/events/hit_trains.hpp"
#include "clickwise/logs/text_log.hpp"
#include "clickwise/motion/potentiometer.hpp"
#include "clickwise/motion/reading_faults.hpp"
#include "clickwise/motion/riding.hpp"
#include "clickwise/report/review_json.hpp"
#include "clickwise/signal/smoother.hpp"
#include "clickwise/workflow/review.hpp"

namespace {

using namespace clickwise;

constexpr int repeats = 7;

double best_ms(const std::function<void()>& stage) {
  double best = 1e9;
  for (int i = 0; i < repeats; ++i) {
    const auto start = std::chrono::steady_clock::now();
    stage();
    const std::chrono::duration<double, std::milli> took = std::chrono::steady_clock::now() - start;
    best = std::min(best, took.count());
  }
  return best;
}

void say(const std::string& stage, double ms) {
  fmt::print("{:<44}{:9.1f} ms\n", stage, ms);
}

}  // namespace

int main(int argc, char** argv) {
  if (argc != 3) {
    fmt::print(stderr, "usage: review_stages LOG BIKE.toml\n");
    return 2;
  }
  const std::string log = argv[1];
  const std::string bike_path = argv[2];
  bike::Bike bike;
  say("bike file", best_ms([&] { bike = bike::read_bike_file(bike_path); }));
  const bike::End& end = *bike.front;
  std::vector<bike::ColumnRef> columns{end.sensor.column};
  if (bike.rear) columns.push_back(bike.rear->sensor.column);
  run::Recording recording;
  say("log to recording",
      best_ms([&] { recording = logs::read_text_log(log, bike.log, columns); }));
  motion::UniformClock clock;
  say("uniform clock", best_ms([&] { clock = motion::uniform_clock(recording); }));
  motion::ReadingFaults faults;
  say("front: faults", best_ms([&] {
        faults = motion::find_reading_faults(recording, 0, {end.sensor.travel_m, end.stroke_m});
      }));
  motion::PotentiometerMotion front;
  say("front: faults, resampling, smoother",
      best_ms([&] { front = motion::from_potentiometer(recording, 0, end, clock); }));
  const std::vector<double> readings = faults.travel_m;
  signal::SmootherModel model;
  say("front: noise of a reading",
      best_ms([&] { model = signal::fit_smoother({readings}, clock.base.rate_hz); }));
  signal::Smoothed smoothed;
  say("front: smoother", best_ms([&] { smoothed = signal::smooth(readings, model); }));
  const auto& counted = front.motion.valid;
  say("front: riding time", best_ms([&] { motion::riding({&front.motion}, {}); }));
  say("front: speed bands", best_ms([&] {
        bands::velocity_bands(front.motion, counted, {0.7, 0.7}, {});
      }));
  say("front: travel", best_ms([&] { bands::travel_use(front.motion, counted, end.stroke_m); }));
  say("front: bottom-outs", best_ms([&] {
        events::bottom_outs(front.motion, counted, {end.stroke_m, end.bottom_out_within_m, 0.0});
      }));
  events::HitTrainOptions train;
  train.stroke_m = end.stroke_m;
  say("front: hit trains", best_ms([&] { events::hit_trains(front.motion, counted, train); }));
  workflow::ReviewOptions options;
  options.ride.log_path = log;
  options.ride.bike_path = bike_path;
  workflow::Ride ride;
  say("all up to motion, both ends", best_ms([&] { ride = workflow::load_ride(options.ride); }));
  workflow::Review review;
  say("all, with bands, events and advice", best_ms([&] { review = workflow::review(options); }));
  std::string json;
  say("JSON", best_ms([&] { json = report::review_json(review); }));
  return 0;
}
