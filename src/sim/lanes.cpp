#include "clickwise/sim/lanes.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "lane_kernel.hpp"
#include "lane_watch.hpp"

namespace clickwise::sim {

namespace {

constexpr float never = 1e30F;
constexpr std::size_t cells_below_zero = 8;  // of the travel histogram; the kernel's shift

static_assert(lane_width == kernel_width);

float narrow(double value) {
  return static_cast<float>(value);
}

// Tables of up to a group of ends, one after the other.
struct Tables {
  std::vector<float> force;  // four floats a cell
  std::vector<float> shaft;  // two

  void add(const WheelTable& table) {
    for (std::size_t i = 0; i + 1 < table.nodes.size(); ++i) {
      const auto& a = table.nodes[i];
      const auto& b = table.nodes[i + 1];
      for (const double value : {a.spring_n, b.spring_n - a.spring_n, a.inverse_ratio,
                                 b.inverse_ratio - a.inverse_ratio})
        force.push_back(narrow(value));
      shaft.push_back(narrow(a.shaft_m));
      shaft.push_back(narrow(b.shaft_m - a.shaft_m));
    }
  }
};

void set_law(LaneLaw& lanes, std::size_t l, const damper::Law& law) {
  const double b = 0.1 * law.bleed_m_s;
  const double knee = b * std::sqrt(law.opening_n);
  lanes.b.at[l] = narrow(b);
  lanes.port.at[l] = narrow(law.port_n_s2_m2);
  lanes.opening_n.at[l] = law.has_valve() ? narrow(law.opening_n) : 0.0F;
  lanes.flow.at[l] = law.has_valve() ? narrow(1.0 / law.slope_n_s_m) : 0.0F;
  lanes.knee_m_s.at[l] = law.has_valve() ? narrow(knee) : never;
  lanes.knee_n.at[l] =
      law.has_valve() ? narrow(law.opening_n + law.port_n_s2_m2 * knee * knee) : 0.0F;
}

void set_end(LaneGroup& group, std::size_t l, const VehicleEnd& end, double step_s) {
  group.step_over_sprung.at[l] = narrow(step_s / end.sprung_mass_kg);
  group.step_over_unsprung.at[l] = narrow(step_s / end.unsprung_mass_kg);
  group.friction_n.at[l] = narrow(end.friction_n);
  group.tyre_n_m.at[l] = narrow(end.tyre.stiffness_n_m);
  group.tyre_n_s_m.at[l] = narrow(end.tyre.damping_n_s_m);
  set_law(group.compression, l, end.curve.compression);
  set_law(group.rebound, l, end.curve.rebound);
}

// `ends` has 1 to lane_width members; spare lanes repeat the first.
LaneGroup group_of(std::span<const VehicleEnd> ends, const Tables& tables, double step_s) {
  LaneGroup group{};
  const WheelTable& table = ends[0].table;
  const std::size_t cells = table.nodes.size() - 1;
  group.step_s = narrow(step_s);
  group.cells_per_m = narrow(1.0 / table.cell_m);
  group.last_cell = narrow(static_cast<double>(cells - 1));
  group.wheel_travel_m = narrow(table.wheel_travel_m);
  group.stop_n_m = narrow(ends[0].stop.stiffness_n_m);
  group.stop_loss_s_m = narrow(ends[0].stop.loss_s_m);
  group.table = tables.force.data();
  group.shaft = tables.shaft.data();
  for (std::size_t l = 0; l < lane_width; ++l) {
    const std::size_t from = l < ends.size() ? l : 0;
    group.offset[l] = static_cast<std::int32_t>(from * cells);
    set_end(group, l, ends[from], step_s);
  }
  return group;
}

LaneLimits limits_of(const TallyPlan& plan) {
  LaneLimits limits{};
  for (std::size_t d = 0; d < directions; ++d) {
    limits.split_m_s[d] = narrow(plan.split_m_s[d]);
    limits.tail_m_s[d] = narrow(plan.tail_m_s[d]);
  }
  limits.tail_travel_m = narrow(plan.tail_travel_m);
  limits.speed_scale = narrow(1.0 / Tally::speed_cell_m_s);
  limits.travel_scale = narrow(1.0 / Tally::travel_cell_m);
  limits.last_speed_cell = static_cast<float>(Tally::speed_cells - 1);
  const double cells = std::ceil(plan.stroke_m / Tally::travel_cell_m) + 2.0 * cells_below_zero;
  limits.last_travel_cell = narrow(cells - 1.0);
  return limits;
}

// The tallies of a group, filled chunk by chunk.
class Counter {
public:
  Counter(const TallyPlan& plan, std::size_t lanes, std::size_t blocks)
      : plan_(plan), limits_(limits_of(plan)), tallies_(lanes), watches_(lanes, LaneWatch(plan)) {
    for (Tally& tally : tallies_) {
      for (auto& speed : tally.speed) speed.assign(Tally::speed_cells, 0);
      tally.travel.assign(static_cast<std::size_t>(limits_.last_travel_cell) + 1, 0);
      tally.blocks.resize(blocks);
    }
  }

  // Samples [from, to) of the chunk count; the first of the chunk is sample `first` of the ride.
  void count(const LaneChunk& chunk, std::size_t from, std::size_t to, std::size_t first,
             std::size_t block) {
    sums_ = {};
    for (float& low : sums_.min_travel_m.at) low = never;
    sum_up(chunk, from, to, limits_, sums_);
    for (std::size_t l = 0; l < tallies_.size(); ++l) {
      add_sums(tallies_[l], block, l, static_cast<double>(to - from));
      add_cells(tallies_[l], l, from, to);
      const StopEvents found = watches_[l].see(chunk, l, from, to, first, sums_.min_travel_m.at[l],
                                               sums_.max_travel_m.at[l]);
      append(tallies_[l], block, found);
    }
  }

  void interrupt() {
    for (LaneWatch& watch : watches_) watch.interrupt();
  }

  std::vector<Tally> tallies() && { return std::move(tallies_); }

private:
  void add_sums(Tally& tally, std::size_t block, std::size_t l, double samples) {
    BlockTally& sum = tally.blocks[block];
    const double in = sums_.moving.at[l];
    sum.samples += samples;
    sum.moving[0] += in;
    sum.moving[1] += samples - in;
    for (std::size_t d = 0; d < directions; ++d) {
      sum.high[d] += sums_.high[d].at[l];
      sum.tail[d] += sums_.tail[d].at[l];
      sum.low_j[d] += sums_.low_j[d].at[l] * plan_.interval_s;
      sum.high_j[d] += sums_.high_j[d].at[l] * plan_.interval_s;
      tally.max_m_s[d] = std::max<double>(tally.max_m_s[d], sums_.max_m_s[d].at[l]);
    }
    sum.travel_m += sums_.travel_m.at[l];
    sum.tail_travel += sums_.tail_travel.at[l];
    tally.max_travel_m = std::max<double>(tally.max_travel_m, sums_.max_travel_m.at[l]);
  }

  void add_cells(Tally& tally, std::size_t l, std::size_t from, std::size_t to) {
    std::uint32_t* const speed[directions] = {tally.speed[0].data(), tally.speed[1].data()};
    std::uint32_t* const travel = tally.travel.data();
    for (std::size_t i = from; i < to; ++i) {
      const std::size_t cell = sums_.speed_cell[i][l];
      ++speed[cell / Tally::speed_cells][cell % Tally::speed_cells];
      ++travel[sums_.travel_cell[i][l]];
    }
  }

  static void append(Tally& tally, std::size_t block, const StopEvents& found) {
    tally.blocks[block].bottom_outs += static_cast<double>(found.bottom_outs.size());
    tally.blocks[block].top_outs += static_cast<double>(found.top_outs.size());
    tally.bottom_outs.insert(tally.bottom_outs.end(), found.bottom_outs.begin(),
                             found.bottom_outs.end());
    tally.top_outs.insert(tally.top_outs.end(), found.top_outs.begin(), found.top_outs.end());
  }

  TallyPlan plan_;
  LaneLimits limits_;
  LaneSums sums_{};
  std::vector<Tally> tallies_;
  std::vector<LaneWatch> watches_;
};

void start(LaneGroup& group, const Forcing& forcing) {
  for (std::size_t l = 0; l < lane_width; ++l) {
    group.sprung_m.at[l] = group.sprung_m_s.at[l] = 0.0F;
    group.wheel_m.at[l] = narrow(forcing.wheel_m);
    group.wheel_m_s.at[l] = narrow(forcing.wheel_m_s);
  }
}

void count_runs(Counter& counter, const LaneChunk& chunk, const std::uint8_t* counted,
                std::size_t samples, std::size_t first, std::size_t block) {
  for (std::size_t i = 0; i < samples;) {
    const bool counts = counted[i] != 0;
    std::size_t to = i;
    while (to < samples && (counted[to] != 0) == counts) ++to;
    if (counts) counter.count(chunk, i, to, first, block);
    if (!counts) counter.interrupt();
    i = to;
  }
}

std::size_t block_samples_of(const TallyPlan& plan) {
  return std::max<std::size_t>(
      1, static_cast<std::size_t>(std::lround(plan.block_s / plan.interval_s)));
}

void ride_stretch(LaneGroup& group, const LaneStretch& stretch, std::size_t block_samples,
                  Counter& counter) {
  const Forcing& forcing = stretch.forcing;
  if (forcing.steps() == 0) return;
  start(group, forcing);
  std::vector<float> ground;  // one step earlier than the forcing's, for its rate
  ground.reserve(forcing.steps() + 1);
  ground.push_back(forcing.ground_m[0] - narrow(forcing.wheel_m_s * forcing.step_s));
  ground.insert(ground.end(), forcing.ground_m.begin(), forcing.ground_m.end());
  LaneChunk chunk;
  const std::size_t total = forcing.steps() / forcing.substeps;
  for (std::size_t done = 0; done < total;) {
    const std::size_t at = stretch.first_sample + done + 1;
    const std::size_t block = at / block_samples;
    const std::size_t samples =
        std::min({chunk_samples, total - done, (block + 1) * block_samples - at});
    advance(group, ground.data() + 1 + done * forcing.substeps,
            forcing.load_m_s2.data() + done * forcing.substeps, samples, forcing.substeps, chunk);
    count_runs(counter, chunk, stretch.counted.data() + done + 1, samples, at, block);
    done += samples;
  }
  counter.interrupt();
}

}  // namespace

std::vector<Tally> ride_lanes(std::span<const VehicleEnd> ends,
                              std::span<const LaneStretch> stretches, const TallyPlan& plan) {
  const std::size_t block_samples = block_samples_of(plan);
  std::size_t samples = 1;
  for (const LaneStretch& stretch : stretches)
    samples = std::max(samples, stretch.first_sample + stretch.counted.size());
  std::vector<Tally> all;
  for (std::size_t from = 0; from < ends.size(); from += lane_width) {
    const auto part = ends.subspan(from, std::min(lane_width, ends.size() - from));
    Tables tables;
    for (const VehicleEnd& end : part) tables.add(end.table);
    Counter counter(plan, part.size(), samples / block_samples + 1);
    for (const LaneStretch& stretch : stretches) {
      LaneGroup group = group_of(part, tables, stretch.forcing.step_s);
      ride_stretch(group, stretch, block_samples, counter);
    }
    auto tallies = std::move(counter).tallies();
    std::move(tallies.begin(), tallies.end(), std::back_inserter(all));
  }
  return all;
}

Tally count_series(std::span<const SeriesStretch> stretches, const damper::Curve& curve,
                   const TallyPlan& plan) {
  const std::size_t block_samples = block_samples_of(plan);
  std::size_t total = 1;
  for (const SeriesStretch& stretch : stretches)
    total = std::max(total, stretch.first_sample + stretch.counted.size());
  Counter counter(plan, 1, total / block_samples + 1);
  LaneChunk chunk{};
  for (const SeriesStretch& stretch : stretches) {
    for (std::size_t done = 0; done < stretch.counted.size();) {
      const std::size_t at = stretch.first_sample + done;
      const std::size_t block = at / block_samples;
      const std::size_t samples = std::min(
          {chunk_samples, stretch.counted.size() - done, (block + 1) * block_samples - at});
      for (std::size_t i = 0; i < samples; ++i) {
        const double v = stretch.velocity_m_s[done + i];
        chunk.travel_m[i].at[0] = narrow(stretch.travel_m[done + i]);
        chunk.velocity_m_s[i].at[0] = narrow(v);
        chunk.power_w[i].at[0] = narrow(curve.force_n(v) * v);
      }
      count_runs(counter, chunk, stretch.counted.data() + done, samples, at, block);
      done += samples;
    }
    counter.interrupt();
  }
  return std::move(std::move(counter).tallies()[0]);
}

}  // namespace clickwise::sim
