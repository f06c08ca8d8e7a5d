// What the `replay` command does: the same ground with other settings.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/damper/damper.hpp"
#include "clickwise/sim/replay.hpp"
#include "clickwise/workflow/ride.hpp"
#include "clickwise/workflow/settings.hpp"
#include "clickwise/workflow/splits.hpp"

namespace clickwise::workflow {

struct EndReplay {
  bike::EndName name = bike::EndName::front;
  bool changed = false;      // some setting of this end, or the rider, was changed
  sim::ReplayResult result;  // its one prediction is the changed bike's
};

struct Replay {
  std::string bike_name;
  LogSummary log;
  std::vector<ChangedSetting> settings;
  std::vector<EndReplay> ends;
  std::vector<std::string> notes;
};

// One setting of both knobs of a click map.
struct MapCell {
  int first = 0;
  int second = 0;
  sim::EndFigures figures;  // modelled
  bool holds_aims = false;  // mean travel, travel used, bottom-outs and top-outs within their aims
};

// Every setting of two adjusters of one end. Cells run through `second` fastest.
struct ClickMap {
  bike::EndName end = bike::EndName::front;
  damper::AdjusterRange first;
  damper::AdjusterRange second;
  std::vector<MapCell> cells;
};

struct ReplayOptions {
  RideOptions ride;
  SplitRequest splits;
  std::vector<std::string> settings;  // "front.low_speed_compression=4"
  unsigned seed = 20240607u;
};

// Throws core::InputError for files or settings that cannot be read, core::JobError when no end can
// be replayed (naming the keys of the bike file that it takes).
Replay replay(const ReplayOptions& options);

// `knobs`: "front.low_speed_compression,front.high_speed_compression". Settings are set first.
ClickMap click_map(const ReplayOptions& options, const std::string& knobs);

}  // namespace clickwise::workflow
