// A cleaned run kept for good: RUN.h5, schema "clickwise-run-1". docs/formats/archive.md.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "clickwise/run/event.hpp"
#include "clickwise/run/fault.hpp"
#include "clickwise/run/motion.hpp"

namespace clickwise::archive {

inline constexpr std::string_view schema = "clickwise-run-1";

struct EndOfRun {
  run::Motion motion;  // its source: what it was measured by; its base: the run's
  double stroke_m = 0.0;
  std::vector<double> felt_m_s2 = {};  // sprung side's accelerometer, NaN: none; empty: not logged
};

struct TextFile {
  std::string name;
  std::string text;
};

// Everything that figures are taken from.
struct Run {
  std::string created;           // RFC 3339, UTC
  std::string program;           // "clickwise 1.2.3"
  TextFile bike;                 // the bike file, named without its folder
  std::vector<TextFile> beside;  // files that it names, as it names them: dyno tables
  std::string log_name;
  double duration_s = 0.0;  // first sample to last
  std::size_t samples = 0;  // of the log
  run::FaultLedger faults;
  std::vector<std::string> notes;
  run::TimeBase time;                // of every series below
  std::vector<std::uint8_t> riding;  // 1: counts as riding
  std::vector<double> speed_m_s;     // ridden speed, NaN: none; empty: not logged
  std::optional<EndOfRun> front;
  std::optional<EndOfRun> rear;
};

// What happened on one end, for other programs to read.
struct EndEvents {
  std::vector<run::EndStop> bottom_outs;
  std::vector<run::EndStop> top_outs;
  std::vector<run::HitTrain> trains;
};

struct Events {
  EndEvents front;
  EndEvents rear;
  std::vector<run::Airtime> airtimes;
};

// Rounds the series and noises of a motion to what an archive keeps: the nearest float of their
// value in mm or mm/s (24 bits: 8 nm at 100 mm, 0.03 um/s at 1 m/s, far below any sensor). Doing so
// a second time changes nothing. So figures taken from a log after this are those taken from its
// archive, bit for bit.
void round_to_stored(run::Motion& motion);
// The same for a series kept in SI: speeds and accelerations.
void round_to_stored(std::vector<double>& values);

// Writes the archive whole or not at all: beside its place, brought to the disk, then renamed. The
// motions and speeds must be rounded to what is stored. Throws core::JobError where the disk does
// not take it.
void write_archive(const std::string& path, const Run& run, const Events& events);

// Whether the file is an HDF5 file whose schema is one of this program's archives, of whatever
// version. Throws core::InputError where there is no such file.
bool is_archive(const std::string& path);

// Throws core::InputError: no archive, one of a later version, cut off or damaged, a part that is
// missing or of a wrong length (named).
Run read_archive(const std::string& path);

}  // namespace clickwise::archive
