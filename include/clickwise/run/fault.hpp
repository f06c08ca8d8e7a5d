// Damage found in a log: one ledger, so that nothing is dropped without being counted.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace clickwise::run {

// The contract's kinds. The names in files are those of to_string().
enum class FaultKind { gap, time_restart, spike, stuck, saturated, missing, truncated };

std::string_view to_string(FaultKind kind);
std::optional<FaultKind> fault_kind_from(std::string_view name);

// What a user can do about it, one sentence.
std::string_view advice(FaultKind kind);

struct Fault {
  FaultKind kind = FaultKind::gap;
  std::string channel;   // the column's name; empty for a fault of the whole log (its clock)
  long long count = 0;   // occurrences: stretches, not samples, where the fault has a length
  double seconds = 0.0;  // time that is masked because of it
};

// Adds to the entry of the same kind and channel, or makes one. Entries with count 0 never appear.
class FaultLedger {
public:
  void add(FaultKind kind, std::string_view channel, long long count, double seconds);
  void merge(const FaultLedger& other);
  const std::vector<Fault>& faults() const { return faults_; }
  bool empty() const { return faults_.empty(); }
  long long count(FaultKind kind) const;

private:
  std::vector<Fault> faults_;
};

}  // namespace clickwise::run
