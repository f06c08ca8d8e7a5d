// The inner loops of the lanes: plain arrays that the compiler turns into vector instructions.
#pragma once

#include <cstddef>
#include <cstdint>

namespace clickwise::sim {

inline constexpr std::size_t kernel_width = 16;

struct alignas(64) Lane {
  float at[kernel_width];
};

// One direction of the damper in the kernel's terms: b = B / 10, flow = 1 / S (0: no valve), and
// the knee, where the valve opens.
struct LaneLaw {
  Lane b, opening_n, flow, port, knee_m_s, knee_n;
};

// State and constants of a group of lanes. `table` holds four floats a cell: spring force at the
// wheel and dx/dz, each with its rise over the cell; `shaft` two: shaft travel and its rise.
struct LaneGroup {
  Lane sprung_m, sprung_m_s, wheel_m, wheel_m_s;
  Lane step_over_sprung, step_over_unsprung, friction_n, tyre_n_m, tyre_n_s_m;
  LaneLaw compression, rebound;
  float step_s, cells_per_m, last_cell, wheel_travel_m, stop_n_m, stop_loss_s_m;
  std::int32_t offset[kernel_width];  // of the lane's table, in cells
  const float* table;
  const float* shaft;
};

inline constexpr std::size_t chunk_samples = 64;

// What a chunk of samples gives back, sample by sample.
struct LaneChunk {
  Lane travel_m[chunk_samples];
  Lane velocity_m_s[chunk_samples];
  Lane power_w[chunk_samples];  // taken by the damper, >= 0
};

// Runs `samples` times `substeps` steps. ground_m[-1] must be readable.
void advance(LaneGroup& group, const float* ground_m, const float* load_m_s2, std::size_t samples,
             std::size_t substeps, LaneChunk& chunk);

struct LaneLimits {
  float split_m_s[2], tail_m_s[2], tail_travel_m, speed_scale, travel_scale, last_speed_cell,
      last_travel_cell;
};

// Sums over a chunk and the histogram cells of its samples.
struct LaneSums {
  Lane moving, high[2], tail[2], low_j[2], high_j[2], travel_m, tail_travel;
  Lane max_m_s[2], max_travel_m, min_travel_m;
  std::uint16_t speed_cell[chunk_samples][kernel_width];  // rebound: + speed cells
  std::uint16_t travel_cell[chunk_samples][kernel_width];
};

void sum_up(const LaneChunk& chunk, std::size_t from, std::size_t to, const LaneLimits& limits,
            LaneSums& sums);

}  // namespace clickwise::sim
