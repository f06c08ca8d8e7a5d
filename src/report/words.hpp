// Phrases that every report uses, so that a thing is called the same everywhere.
#pragma once

#include <string>
#include <vector>

#include "clickwise/advice/advise.hpp"
#include "clickwise/workflow/review.hpp"

namespace clickwise::report {

// "2:05" for 125 s, "0:07.4" below ten seconds
std::string duration_words(double seconds);

// "fork", "shock"; "Fork", "Shock"
std::string part_words(bike::EndName end, bool capital = false);

// "fork high-speed compression: from 6 to 4 clicks out (2 firmer)"
std::string step_words(const advice::Step& step);

// "0.93: likely" and the like
std::string confidence_words(double confidence);

// A line each: "bottom-outs: 4 now, 1 then (0 to 3)", "mean travel: 39.7 mm now, 40.9 then (40.2 to
// 41.0)", and a last one that says what the brackets are. Empty without predictions.
std::vector<std::string> predictions_words(const std::vector<advice::Prediction>& predictions);

// "packs down 3.1 mm per hit (aim 2)"
std::string symptom_words(const advice::Symptom& symptom);

// "Not for an adjuster: ...; look at the spring: ..."
std::string handover_words(const advice::Handover& handover);

// "asked for", "the knee of the damper curve", ...
std::string split_source_words(workflow::SplitSource source);

// One sentence a fault: "gap: 2 on the clock, 1.2 s left out; ..."
std::vector<std::string> fault_words(const run::FaultLedger& faults);

// Vibration at the hands, as information; empty without.
std::vector<std::string> hand_arm_words(const std::optional<workflow::HandArm>& found);

}  // namespace clickwise::report
