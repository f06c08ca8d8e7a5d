// Readings that stand still where no suspension would: saturated and stuck.
#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "fault_search.hpp"

namespace clickwise::motion {

namespace {

constexpr std::array<double, 9> converter_ends{0.0,     255.0,   1023.0,   4095.0, 8191.0,
                                               16383.0, 65535.0, -32768.0, 32767.0};
constexpr double outside_at_converter_end_share = 0.01;  // of the stroke
constexpr std::size_t fewest_at_converter_end = 3;
constexpr double held_flat_s = 20e-3;      // a turning point beyond the stroke is shorter
constexpr double moving_share = 0.05;      // of its whole range: what another channel moves
constexpr std::size_t unusual_flats = 20;  // longest runs of one reading that may be faults
constexpr std::size_t usual_flats = 5;     // so many times the usual longest run is stuck

double metres_outside(const FaultSearch& search, std::size_t i) {
  return std::max(search.travel_m[i] - search.range.stroke_m, -search.travel_m[i]);
}

bool outside(const FaultSearch& search, std::size_t i) {
  return metres_outside(search, i) > search.options.held_outside_share * search.range.stroke_m;
}

// The run of samples from `begin` that stay within `band` of its first reading.
std::size_t flat_until(const FaultSearch& search, std::size_t begin, std::size_t end, double band) {
  const auto readings = search.readings();
  std::size_t i = begin + 1;
  while (i < end && std::abs(readings[i] - readings[begin]) <= band) ++i;
  return i;
}

bool held_at_converter_end(const FaultSearch& search, std::size_t begin, std::size_t end) {
  return metres_outside(search, begin) > outside_at_converter_end_share * search.range.stroke_m &&
         std::ranges::find(converter_ends, search.readings()[begin]) != converter_ends.end() &&
         flat_until(search, begin, end, 0.0) - begin >= fewest_at_converter_end;
}

bool held_outside(const FaultSearch& search, std::size_t begin, std::size_t end) {
  if (!outside(search, begin)) return false;
  const auto& x = search.range.travel_m.x();
  const double band = search.options.flat_share * (x.back() - x.front());
  return flat_until(search, begin, end, band) - begin >= search.samples(held_flat_s, 4);
}

run::Stretch padded(run::Stretch stretch, run::Stretch within) {
  return {stretch.begin > within.begin ? stretch.begin - 1 : stretch.begin,
          std::min(stretch.end + 1, within.end)};
}

double range(const run::Channel& channel, std::size_t begin, std::size_t end) {
  double low = std::numeric_limits<double>::infinity(), high = -low;
  for (std::size_t i = begin; i < end; ++i) {
    if (!std::isfinite(channel.readings[i])) continue;
    low = std::min(low, channel.readings[i]);
    high = std::max(high, channel.readings[i]);
  }
  return high > low ? high - low : 0.0;
}

// Does any other channel move over [begin, end)?
bool others_move(const FaultSearch& search, std::size_t begin, std::size_t end) {
  const auto& channels = search.recording.channels;
  for (std::size_t c = 0; c < channels.size(); ++c) {
    if (c == search.channel) continue;
    const double moved = range(channels[c], begin, end);
    if (moved > 0.0 && moved > moving_share * range(channels[c], 0, channels[c].readings.size()))
      return true;
  }
  return false;
}

// Runs of one and the same reading: the long ones, and how many there are of each length.
struct Flats {
  std::vector<run::Stretch> longer;  // than `least`
  std::vector<std::size_t> count;    // by length, up to `least`
};

Flats flats_of(const FaultSearch& search, const std::vector<run::Stretch>& runs,
               std::size_t least) {
  const auto readings = search.readings();
  Flats flats{{}, std::vector<std::size_t>(least + 1, 0)};
  for (const run::Stretch& run : runs) {
    std::size_t begin = run.begin;
    for (std::size_t i = run.begin + 1; i <= run.end; ++i) {
      if (i < run.end && readings[i] == readings[i - 1]) continue;
      if (i - begin > least)
        flats.longer.push_back({begin, i});
      else
        ++flats.count[i - begin];
      begin = i;
    }
  }
  return flats;
}

// How long this channel's readings usually stay the same at most: a channel with noise never rests.
// The longest few may be the faults that are looked for.
std::size_t usual_flat_samples(const Flats& flats) {
  std::size_t longer = flats.longer.size();
  if (longer > unusual_flats) {
    std::vector<std::size_t> lengths;
    for (const run::Stretch& flat : flats.longer) lengths.push_back(flat.end - flat.begin);
    const auto place = lengths.begin() + static_cast<std::ptrdiff_t>(unusual_flats);
    std::ranges::nth_element(lengths, place, std::ranges::greater{});
    return *place;
  }
  for (std::size_t length = flats.count.size(); length-- > 2;) {
    longer += flats.count[length];
    if (longer > unusual_flats) return length;
  }
  return 1;
}

// How long a reading at this travel may stay the same. The ground and the air hold an end at its
// stops, noise or not.
std::size_t stuck_samples(const FaultSearch& search, double travel_m, std::size_t usual) {
  const ReadingFaultOptions& options = search.options;
  if (travel_m < options.extended_m) return search.samples(options.stuck_extended_s, 3);
  const std::size_t most = search.samples(options.stuck_s, 3);
  if (travel_m > search.range.stroke_m - options.extended_m) return most;
  return std::clamp(usual, std::min(most, search.samples(options.stuck_noisy_s, 3)), most);
}

}  // namespace

Masked mask_saturated(FaultSearch& search) {
  Masked masked;
  for (const run::Stretch& run : search.usable_runs()) {
    for (std::size_t i = run.begin; i < run.end; ++i) {
      if (!held_at_converter_end(search, i, run.end) && !held_outside(search, i, run.end)) continue;
      run::Stretch held{i, flat_until(search, i, run.end, 0.0)};
      while (held.begin > run.begin && outside(search, held.begin - 1)) --held.begin;
      while (held.end < run.end && outside(search, held.end)) ++held.end;
      mask(search, padded(held, run), masked);
      i = held.end;
    }
  }
  return masked;
}

Masked mask_stuck(FaultSearch& search) {
  Masked masked;
  const auto runs = search.usable_runs();
  const std::size_t least = search.samples(search.options.stuck_noisy_s, 3) - 1;
  const Flats flats = flats_of(search, runs, least);
  const std::size_t usual = usual_flats * usual_flat_samples(flats);
  for (const run::Stretch& flat : flats.longer) {
    const std::size_t limit = stuck_samples(search, search.travel_m[flat.begin], usual);
    if (flat.end - flat.begin < limit || !others_move(search, flat.begin, flat.end)) continue;
    const auto within =
        std::ranges::find_if(runs, [&](const run::Stretch& run) { return flat.begin < run.end; });
    mask(search, padded(flat, *within), masked);
  }
  return masked;
}

}  // namespace clickwise::motion
