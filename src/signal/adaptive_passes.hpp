// The passes of the adaptive smoother over one chunk of readings: each average runs back and forth,
// and every pass does as much as its direction allows, since memory is what they wait for.
#pragma once

#include <cstddef>
#include <span>
#include <vector>

#include "row.hpp"

namespace clickwise::signal {

struct BankRows {
  Row real_gain, pair_gain, pair_keep;
};

// What the passes hand on; one of each a reading of the chunk.
struct PassRows {
  std::vector<double> readings;
  std::vector<Row> travel;   // of the bank's members
  std::vector<Row> bands;    // b_k, then v_last
  std::vector<Row> power;    // of the bands, on its way through the averages
  std::vector<float> alert;  // how far that is above noise, on its way through its average

  void resize(std::size_t n);
};

// A recursive pass of the bank: past the real pole, past the pair, and the latter's last step.
struct BankState {
  Row u{}, w{}, step{};
};

// What the forward passes carry from one chunk to the next, so that only a series' first chunk
// needs a margin ahead of it.
struct Carried {
  explicit Carried(double first_reading);

  BankState bank;
  Row first{}, second{};
  float alert = 0.0F;
};

// The bank forwards. The next chunk begins at this one's row `next`.
void run_forward(const BankRows& bank, std::size_t next, Carried& carried, PassRows& rows);

// The bank backwards; the bands, by central differences to `reach` readings on either side; the
// backward half of their power's first average, `keep` being the share kept a reading.
void run_backward(const BankRows& bank, std::size_t reach, double rate_hz, const Row& keep,
                  PassRows& rows);

// Shares of averages kept a reading, and what is noise.
struct GainRule {
  Row first_keep, second_keep;
  Row toll;            // taken off a band's power
  Row freedom, scale;  // deviations of power above noise: power * scale - freedom
  Row noise;           // of the bands, (m/s)^2, above 0
  Row step_variance;   // Wiener error of the bands at a gain of 1
  float alert_keep;
  float alert_cap, alert_from, alert_slope;
};

// The forward half of the first average; the power that its gains let through; the forward halves
// of that power's average and of the alert's.
void find_gains(const GainRule& rule, std::size_t reach, std::size_t next, Carried& carried,
                PassRows& rows);

// What comes of readings [margin, margin + travel_m.size()) of the chunk.
struct PassOutput {
  std::size_t margin;
  std::span<double> travel_m, velocity_m_s, sigma_m_s;
  std::vector<double>& open_gains;  // sum of the gains of every 16th reading
};

// The backward halves of both averages, the gains, and what they let through.
void combine(const GainRule& rule, std::size_t reach, PassRows& rows, const PassOutput& out);

}  // namespace clickwise::signal
