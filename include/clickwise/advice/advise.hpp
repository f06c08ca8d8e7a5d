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
  std::optional<unsigned> seed;  // of the ensemble; empty for a step by rule
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
  std::vector<Symptom> symptoms;    // all that cross their aim, most severe first
  std::string leave_it;             // why there is no step, when there is none
  std::vector<std::string> checks;  // what in the bike file cannot be right, by the log: sentences
  std::vector<std::string> notes;   // how it was judged where it was not by replay: sentences
};

struct AdviceOptions {
  double least_confidence = 0.7;  // below it the advice is to leave it
  int most_clicks = 3;            // 1 to 3
  bool by_rule = false;           // quick: the reach of a click and the signs of physics
  unsigned seed = 20240607u;      // of the block bootstrap and the ensemble
};

// Every move is ridden over the ride's own ground (docs/method/advice.md) where the bike file knows
// the damper, spring and masses; otherwise, and for a ride too broken to replay, it is judged by
// rule, and a note says so. Where the replay shows that the bike file cannot be right, that end
// gets no step but a check.
Advice advise(const std::vector<EndRide>& rides, const bike::Aims& aims,
              const AdviceOptions& options = {});

// The cautions that go with every advised step, in the order they are shown.
const std::vector<std::string>& cautions();

}  // namespace clickwise::advice
