#include "lane_kernel.hpp"

#include <algorithm>
#include <cmath>

// One binary for every x86-64: the loader takes the widest version that the machine has.
#if defined(__x86_64__) && defined(__GNUC__) && !defined(__clang__) && \
    !defined(__SANITIZE_ADDRESS__)
#define CLICKWISE_LANES \
  __attribute__((target_clones("arch=x86-64-v4", "arch=x86-64-v3", "default")))
#else
#define CLICKWISE_LANES
#endif

namespace clickwise::sim {

namespace {

// Both branches of a choice are computed and one is kept: no jumps, so that lanes stay together.
[[gnu::always_inline]] inline float pick(bool first, float a, float b) {
  return first ? a : b;
}
[[gnu::always_inline]] inline float at_most(float a, float b) {
  return a < b ? a : b;
}
[[gnu::always_inline]] inline float at_least_0(float a) {
  return a > 0.0F ? a : 0.0F;
}

// a for weight 1, b for weight 0: where a choice between two loads would become a jump.
[[gnu::always_inline]] inline float mix(float weight, float a, float b) {
  return weight * a + (1.0F - weight) * b;
}

struct Flow {
  float b, opening, flow, port;
};

// v >= 0 of implicit_speed_m_s, in the branch (bleed alone or valve open) that the knee decides.
[[gnu::always_inline]] inline float speed_of(const Flow& law, bool open, float gain, float drive) {
  constexpr float tiny = 1e-20F;
  const float flow = pick(open, law.flow, 0.0F);
  const float opening = pick(open, law.opening, 0.0F);
  const float c = drive + opening * flow;
  const float root = std::sqrt(law.b * law.b + 4.0F * (gain + flow) * c);
  float s = 2.0F * c / (law.b + root + tiny);
  float v = law.b * s + (s * s - opening) * flow;
  const float port = gain * law.port;
#pragma GCC unroll 2
  for (int i = 0; i < 2; ++i) {
    const float dv = law.b + 2.0F * s * flow;
    const float excess = gain * s * s + v + port * v * v - drive;
    s -= excess / (2.0F * gain * s + dv + 2.0F * port * v * dv + tiny);
    v = law.b * s + (s * s - opening) * flow;
  }
  return at_least_0(v);
}

struct Instant {
  float ground_m, ground_m_s, load_m_s2;
};

[[gnu::always_inline]] inline float step_lane(LaneGroup& g, std::size_t l, const Instant& now,
                                              float& velocity) {
  const float h = g.step_s;
  const float z = g.wheel_m.at[l] - g.sprung_m.at[l];
  const float u = z * g.cells_per_m;
  const float held_u = at_most(at_least_0(u), g.last_cell);
  const auto cell = static_cast<std::int32_t>(held_u);
  const float part = u - static_cast<float>(cell);
  const std::int32_t node = 4 * (g.offset[l] + cell);
  const float spring = g.table[node] + part * g.table[node + 1];
  const float inverse_ratio = g.table[node + 2] + part * g.table[node + 3];

  const float old_v = (g.wheel_m_s.at[l] - g.sprung_m_s.at[l]) * inverse_ratio;
  const float past = at_least_0(z - g.wheel_travel_m);
  const float above = at_least_0(-z);
  const float side = pick(above > 0.0F, -1.0F, 1.0F);
  const float depth = (past + above) * inverse_ratio;
  const float stop = side * g.stop_n_m * depth * at_least_0(1.0F + g.stop_loss_s_m * side * old_v);
  const float held = spring + stop * inverse_ratio;

  const float deflection = now.ground_m - g.wheel_m.at[l];
  const float rate = now.ground_m_s - g.wheel_m_s.at[l];
  const float pressed = at_least_0(g.tyre_n_m.at[l] * deflection + g.tyre_n_s_m.at[l] * rate);
  const float tyre = pick(deflection > 0.0F, pressed, 0.0F);

  const float per_sprung = g.step_over_sprung.at[l];
  const float per_unsprung = g.step_over_unsprung.at[l];
  const float mobility = per_sprung + per_unsprung;
  const float gain = mobility * inverse_ratio * inverse_ratio;
  const float free_v = old_v + (tyre * per_unsprung - held * mobility) * inverse_ratio;
  const float drive = at_least_0(std::fabs(free_v) - gain * g.friction_n.at[l]);
  const bool in = free_v >= 0.0F;
  const LaneLaw& c = g.compression;
  const LaneLaw& r = g.rebound;
  const float w = pick(in, 1.0F, 0.0F);
  const Flow law{mix(w, c.b.at[l], r.b.at[l]), mix(w, c.opening_n.at[l], r.opening_n.at[l]),
                 mix(w, c.flow.at[l], r.flow.at[l]), mix(w, c.port.at[l], r.port.at[l])};
  const float knee_v = mix(w, c.knee_m_s.at[l], r.knee_m_s.at[l]);
  const float knee_n = mix(w, c.knee_n.at[l], r.knee_n.at[l]);
  const float speed = speed_of(law, drive > knee_v + gain * knee_n, gain, drive);
  const float v = pick(in, speed, -speed);

  const float resisting = (free_v - v) / gain;
  const float wheel = held + resisting * inverse_ratio;
  const float fall = h * now.load_m_s2;
  g.sprung_m_s.at[l] += wheel * per_sprung - fall;
  g.wheel_m_s.at[l] += (tyre - wheel) * per_unsprung - fall;
  g.sprung_m.at[l] += h * g.sprung_m_s.at[l];
  g.wheel_m.at[l] += h * g.wheel_m_s.at[l];
  velocity = v;
  return at_least_0(std::fabs(resisting) - g.friction_n.at[l]) * speed;
}

[[gnu::always_inline]] inline float shaft_of(const LaneGroup& g, std::size_t l) {
  const float u = (g.wheel_m.at[l] - g.sprung_m.at[l]) * g.cells_per_m;
  const auto cell = static_cast<std::int32_t>(at_most(at_least_0(u), g.last_cell));
  const std::int32_t node = 2 * (g.offset[l] + cell);
  return g.shaft[node] + (u - static_cast<float>(cell)) * g.shaft[node + 1];
}

}  // namespace

CLICKWISE_LANES
void advance(LaneGroup& group, const float* ground_m, const float* load_m_s2, std::size_t samples,
             std::size_t substeps, LaneChunk& chunk) {
  LaneGroup g = group;
  for (std::size_t i = 0; i < samples; ++i) {
    for (std::size_t k = 0; k < substeps; ++k, ++ground_m, ++load_m_s2) {
      const Instant now{*ground_m, (*ground_m - ground_m[-1]) / g.step_s, *load_m_s2};
#pragma GCC ivdep
      for (std::size_t l = 0; l < kernel_width; ++l)
        chunk.power_w[i].at[l] = step_lane(g, l, now, chunk.velocity_m_s[i].at[l]);
    }
#pragma GCC ivdep
    for (std::size_t l = 0; l < kernel_width; ++l) chunk.travel_m[i].at[l] = shaft_of(g, l);
  }
  group = g;
}

CLICKWISE_LANES
void sum_up(const LaneChunk& chunk, std::size_t from, std::size_t to, const LaneLimits& limits,
            LaneSums& sums) {
  LaneSums& s = sums;
  for (std::size_t i = from; i < to; ++i) {
#pragma GCC ivdep
    for (std::size_t l = 0; l < kernel_width; ++l) {
      const float x = chunk.travel_m[i].at[l];
      const float v = chunk.velocity_m_s[i].at[l];
      const float power = chunk.power_w[i].at[l];
      const float in = pick(v >= 0.0F, 1.0F, 0.0F);
      const float out = 1.0F - in;
      const float speed = std::fabs(v);
      const float high_in = pick(v > limits.split_m_s[0], 1.0F, 0.0F);
      const float high_out = pick(-v > limits.split_m_s[1], 1.0F, 0.0F);
      s.moving.at[l] += in;
      s.high[0].at[l] += high_in;
      s.high[1].at[l] += high_out;
      s.tail[0].at[l] += pick(v > limits.tail_m_s[0], 1.0F, 0.0F);
      s.tail[1].at[l] += pick(-v > limits.tail_m_s[1], 1.0F, 0.0F);
      s.high_j[0].at[l] += high_in * power;
      s.high_j[1].at[l] += high_out * power;
      s.low_j[0].at[l] += (in - high_in) * power;
      s.low_j[1].at[l] += (out - high_out) * power;
      s.travel_m.at[l] += x;
      s.tail_travel.at[l] += pick(x > limits.tail_travel_m, 1.0F, 0.0F);
      s.max_m_s[0].at[l] = std::max(s.max_m_s[0].at[l], v);
      s.max_m_s[1].at[l] = std::max(s.max_m_s[1].at[l], -v);
      s.max_travel_m.at[l] = std::max(s.max_travel_m.at[l], x);
      s.min_travel_m.at[l] = std::min(s.min_travel_m.at[l], x);
      const float speed_cell = at_most(speed * limits.speed_scale, limits.last_speed_cell) +
                               out * (limits.last_speed_cell + 1.0F);
      const float travel_cell =
          at_most(at_least_0(x * limits.travel_scale + 8.0F), limits.last_travel_cell);
      s.speed_cell[i][l] = static_cast<std::uint16_t>(static_cast<std::int32_t>(speed_cell));
      s.travel_cell[i][l] = static_cast<std::uint16_t>(static_cast<std::int32_t>(travel_cell));
    }
  }
}

}  // namespace clickwise::sim
