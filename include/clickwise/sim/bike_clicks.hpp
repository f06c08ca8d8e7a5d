// A bike file's text with other clicks, everything else as it was written.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "clickwise/bike/adjuster.hpp"
#include "clickwise/core/errors.hpp"

namespace clickwise::sim {

// One adjuster's new setting, and where it was asked for.
struct ClickChange {
  bike::EndName end = bike::EndName::front;
  bike::Adjuster adjuster = bike::Adjuster::low_speed_compression;
  int setting = 0;
  core::Place asked_at;
};

// "front.low_speed_compression" to its parts; empty when it is none.
std::optional<std::pair<bike::EndName, bike::Adjuster>> adjuster_path(std::string_view name);

// Replaces the numbers of the `setting` keys in the text; comments and layout stay. Throws
// core::InputError at `asked_at` when the bike has no such adjuster or not so many clicks.
std::string with_clicks(std::string text, const std::string& path,
                        const std::vector<ClickChange>& changes);

}  // namespace clickwise::sim
