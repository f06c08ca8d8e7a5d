// From symptoms to a step: which adjuster, which way, how many clicks, how sure - or leave it.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/advice/end_ride.hpp"
#include "clickwise/advice/symptom.hpp"

namespace clickwise::advice {

// A predicted count or figure: now, after the step, and the 90 % bounds of "after".
struct Prediction {
  std::string metric;  // the contract's name: "bottom_outs", ...
  double now = 0.0;
  double then = 0.0;
  double low = 0.0;
  double high = 0.0;
};

// One step of one adjuster.
struct Step {
  bike::EndName end = bike::EndName::front;
  bike::Adjuster adjuster = bike::Adjuster::low_speed_compression;
  int from = 0;
  int to = 0;
  Symptom symptom;
  std::string why;          // the numbers it rests on, in the words of the trade
  double confidence = 0.0;  // 0 to 1
  std::vector<Prediction> predicted;
};

// A symptom that no adjuster reaches: who or what it is for.
struct Handover {
  Symptom symptom;
  std::string to;   // "spring", "volume", "service", "calibration", ...
  std::string why;  // one sentence
};

struct Advice {
  std::vector<Step> steps;  // best first, at most one an end; empty: leave it
  std::vector<Handover> handovers;
  std::vector<Symptom> symptoms;  // all that cross their aim, most severe first
  std::string leave_it;           // why there is no step, when there is none
};

struct AdviceOptions {
  double least_confidence = 0.7;  // below it the advice is to leave it
  int most_clicks = 3;            // 1 to 3
  bool by_replay = false;         // ride the moves over the ride's own ground; some seconds more
  unsigned seed = 20240607u;      // of the block bootstrap
};

Advice advise(const std::vector<EndRide>& rides, const bike::Aims& aims,
              const AdviceOptions& options = {});

// The cautions that go with every advised step, in the order they are shown.
const std::vector<std::string>& cautions();

}  // namespace clickwise::advice
