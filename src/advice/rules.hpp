// The signs of physics: which moves of which adjusters can ease a symptom, and who it is for when
// none can. All rules: common practice of the trade, no source.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/advice/end_ride.hpp"
#include "clickwise/advice/symptom.hpp"
#include "clickwise/damper/damper.hpp"

namespace clickwise::advice {

struct Move {
  bike::Adjuster adjuster = bike::Adjuster::low_speed_compression;
  bool firmer = false;  // towards closed
};

// Whether clicks can be the cure. Mean travel off its aim is the spring's job where the end would
// stand off it too; where it would stand within the aim, the damper holds it there while riding.
bool is_for_clicks(const Symptom& symptom, const EndRide& ride);

// Moves that ease the symptom, the most direct first; empty when it is not a job for an adjuster.
const std::vector<Move>& moves_for(SymptomKind kind);

// Whether a firmer spring, smaller chamber or stronger bumper (true) or a softer one (false) can
// ease it; empty when it is not a matter of these.
std::optional<bool> part_for(SymptomKind kind);

struct Receiver {
  std::string to;
  std::string why;
};

// Who a symptom is handed to when no adjuster reaches it.
const Receiver& receiver_of(SymptomKind kind);

// The same while the bike file does not know the damper, so that no click can be named.
const Receiver& receiver_without_damper(SymptomKind kind);

// Why a step of this adjuster is less sure than it might be, to go behind its reason; empty where
// its curve and its clicks were measured.
std::string doubt_words(const damper::Damper& damper, const damper::AdjusterRange& range);

}  // namespace clickwise::advice
