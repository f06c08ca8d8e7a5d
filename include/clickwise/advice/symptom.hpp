// Symptoms: what a ride shows to be off its aim, each a number with its own uncertainty.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "clickwise/bike/adjuster.hpp"

namespace clickwise::advice {

enum class SymptomKind {
  hard_bottoming,    // bottom-outs met above the compression split, per minute of riding
  slow_bottoming,    // bottom-outs met at or below it, per minute
  rides_deep,        // mean travel as a share of the stroke, too large
  rides_high,        // the same, too small
  unused_travel,     // largest travel as a share of the stroke, too small
  packs_down,        // climb of the start travel from hit to hit of a train, mm per hit
  returns_too_fast,  // top-outs per minute of riding
  harsh,             // 95th percentile of the damper's compression force over the static load
  held_by_platform,  // share of riding time at shaft speeds below 20 mm/s
  wallows,           // damping ratio of the body on this end, too small
};

// "hard bottoming", for screens and the JSON's `symptom`
std::string_view words(SymptomKind kind);

// The unit of the symptom's value, as it is shown: "per minute", "% of stroke", "mm per hit", "".
std::string_view unit(SymptomKind kind);

// How sharply the aim itself is known, in the unit of unit(kind): being off by less is of no
// consequence to a rider. Common practice, no source.
double aim_tolerance(SymptomKind kind);

// A figure beside its aim. Severity is the distance beyond the aim in units of its uncertainty: the
// figure's own standard error (block bootstrap over the ride) and the aim's tolerance together; 0
// when the aim is met.
struct Symptom {
  SymptomKind kind = SymptomKind::hard_bottoming;
  bike::EndName end = bike::EndName::front;
  double value = 0.0;  // in the unit of unit(kind); shares as 0 to 100 for "%"
  double low = 0.0;    // 90 % interval of the value
  double high = 0.0;
  double aim = 0.0;    // the bound that should hold, same unit
  double sign = 1.0;   // +1: the aim is an upper bound; -1: a lower one
  double error = 1.0;  // that uncertainty, one standard deviation
  double severity = 0.0;

  // Share of the sampling distribution that lies beyond the aim, 0.5 to 1 when the aim is crossed.
  double certainty() const;
};

}  // namespace clickwise::advice
