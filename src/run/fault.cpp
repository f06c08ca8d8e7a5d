#include "clickwise/run/fault.hpp"

#include <algorithm>
#include <array>

namespace clickwise::run {

namespace {

struct Row {
  std::string_view name;
  std::string_view advice;
};

constexpr std::array<Row, 7> table{{
    {"gap", "the logger missed samples: check its card, its battery and its cable"},
    {"time_restart", "the clock jumped back: the logger restarted in mid-log; check its power"},
    {"spike", "single readings jumped: check the sensor's plug, its wiring and its screen"},
    {"stuck", "the reading froze while the rest moved: check the sensor's linkage and its plug"},
    {"saturated",
     "the reading stood at the converter's end: check the supply and the sensor range"},
    {"missing", "cells were empty or no numbers: check the logger's settings and its card"},
    {"truncated",
     "the last line was cut off: the logger lost power; end a log before switching off"},
}};

}  // namespace

std::string_view to_string(FaultKind kind) {
  return table.at(static_cast<std::size_t>(kind)).name;
}

std::optional<FaultKind> fault_kind_from(std::string_view name) {
  for (std::size_t i = 0; i < table.size(); ++i)
    if (table[i].name == name) return static_cast<FaultKind>(i);
  return std::nullopt;
}

std::string_view advice(FaultKind kind) {
  return table.at(static_cast<std::size_t>(kind)).advice;
}

void FaultLedger::add(FaultKind kind, std::string_view channel, long long count, double seconds) {
  if (count <= 0) return;
  const auto same = std::find_if(faults_.begin(), faults_.end(), [&](const Fault& fault) {
    return fault.kind == kind && fault.channel == channel;
  });
  if (same == faults_.end()) {
    faults_.push_back({kind, std::string(channel), count, seconds});
    return;
  }
  same->count += count;
  same->seconds += seconds;
}

void FaultLedger::merge(const FaultLedger& other) {
  for (const Fault& fault : other.faults_)
    add(fault.kind, fault.channel, fault.count, fault.seconds);
}

long long FaultLedger::count(FaultKind kind) const {
  long long sum = 0;
  for (const Fault& fault : faults_)
    if (fault.kind == kind) sum += fault.count;
  return sum;
}

}  // namespace clickwise::run
