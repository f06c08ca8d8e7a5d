// One run reviewed: bands, travel, events, what each click reaches, and the advice.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/advice/advise.hpp"
#include "clickwise/bands/travel.hpp"
#include "clickwise/bands/velocity.hpp"
#include "clickwise/damper/reach.hpp"
#include "clickwise/run/event.hpp"
#include "clickwise/sim/apparent.hpp"
#include "clickwise/workflow/ride.hpp"
#include "clickwise/workflow/splits.hpp"

namespace clickwise::workflow {

// Where the split of an end came from.
enum class SplitSource { asked, bike_file, knee, fallback };

struct AdjusterReview {
  damper::AdjusterRange range;
  damper::Reach reach;
};

struct EndReview {
  bike::EndName name = bike::EndName::front;
  run::Source source = run::Source::potentiometer;
  double stroke_m = 0.0;
  double riding_s = 0.0;
  double velocity_noise_m_s = 0.0;
  double cutoff_hz = 0.0;
  std::string smoothing;
  bands::VelocityBands bands;
  SplitSource compression_split_source = SplitSource::fallback;
  SplitSource rebound_split_source = SplitSource::fallback;
  std::string travel_withheld;  // why travel, bottom-outs, top-outs and trains are empty; or empty
  bands::TravelUse travel;
  std::vector<run::EndStop> bottom_outs;
  std::vector<run::EndStop> top_outs;
  std::vector<run::HitTrain> trains;
  std::vector<AdjusterReview> adjusters;  // empty without a damper
  bool damper_assumed = false;
  std::optional<sim::ApparentDamper> apparent;  // empty without an accelerometer on the sprung side
};

// Front beside rear; only when both ends were logged.
struct FrontRear {
  double mean_travel_difference = 0.0;  // front less rear, as a share of each stroke
  double compression_p95_ratio = 0.0;   // front over rear, at the wheel
  double rebound_p95_ratio = 0.0;
};

struct Review {
  std::string bike_name;
  LogSummary log;
  std::vector<EndReview> ends;
  std::optional<FrontRear> front_rear;
  std::optional<HandArm> hand_arm;
  std::vector<run::Airtime> airtimes;  // of both ends together, or of the one that was logged
  advice::Advice advice;
  std::vector<std::string> missing;  // what each further key of the bike file would bring
  std::vector<std::string> notes;
};

struct ReviewOptions {
  RideOptions ride;
  SplitRequest splits;
  bool advice_by_rule = false;  // advice::AdviceOptions::by_rule
};

// Throws what load_ride throws.
Review review(const ReviewOptions& options);

}  // namespace clickwise::workflow
