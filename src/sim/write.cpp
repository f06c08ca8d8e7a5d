#include "clickwise/sim/write.hpp"

#include <fmt/format.h>

#include <cmath>
#include <filesystem>
#include <iterator>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/sim/truth_figures.hpp"
#include "whole_file.hpp"

namespace clickwise::sim {

namespace {

constexpr std::size_t piece_bytes = 1 << 18;

void write_whole(const std::string& path, std::string_view text) {
  WholeFile file(path);
  file.write(text);
  file.commit();
}

void write_truth_table(const Truth& truth, const std::string& path) {
  WholeFile file(path);
  std::string text = "t_s";
  for (const auto name : bike::both_ends)
    if (truth.end(name))
      fmt::format_to(std::back_inserter(text),
                     ",{0}_travel_mm,{0}_velocity_mm_s,{0}_tyre_force_n,{0}_ground_mm",
                     bike::to_string(name));
  for (std::size_t i = 0; i < truth.samples(); ++i) {
    fmt::format_to(std::back_inserter(text), "\n{:.6f}", static_cast<double>(i) / truth.rate_hz);
    for (const auto name : bike::both_ends)
      if (const auto& end = truth.end(name))
        fmt::format_to(std::back_inserter(text), ",{:.4f},{:.3f},{:.1f},{:.3f}",
                       core::to_mm(end->travel_m[i]), core::to_mm(end->velocity_m_s[i]),
                       end->tyre_n[i], core::to_mm(end->ground_m[i]));
    if (text.size() < piece_bytes) continue;
    file.write(text);
    text.clear();
  }
  file.write(text + "\n");
  file.commit();
}

std::string toml_number(double value, int decimals) {
  if (std::isfinite(value)) return fmt::format("{:.{}f}", value, decimals);
  return std::isnan(value) ? "nan" : "inf";
}

std::string band_lines(const BandTruth& band) {
  const auto mm_s = [](double m_s) { return toml_number(core::to_mm(m_s), 1); };
  return fmt::format(
      "{{ split_mm_s = {}, low_s = {:.3f}, high_s = {:.3f}, p50_mm_s = {}, p95_mm_s = {}, "
      "max_mm_s = {} }}\n",
      mm_s(band.split_m_s), band.low_s, band.high_s, mm_s(band.p50_m_s), mm_s(band.p95_m_s),
      mm_s(band.max_m_s));
}

std::string end_lines(std::string_view name, const EndFigures& figures) {
  std::string text = fmt::format("\n[{}]\nairborne_s = {:.3f}\n", name, figures.airborne_s);
  text += "compression = " + band_lines(figures.compression);
  text += "rebound = " + band_lines(figures.rebound);
  text += fmt::format("travel = {{ mean_mm = {:.3f}, p95_mm = {:.3f}, max_mm = {:.3f} }}\n",
                      core::to_mm(figures.travel_mean_m), core::to_mm(figures.travel_p95_m),
                      core::to_mm(figures.travel_max_m));
  text += "bottom_outs = [\n";
  for (const auto& stop : figures.bottom_outs)
    text += fmt::format("  {{ t_s = {:.4f}, depth_mm = {:.3f}, closing_speed_mm_s = {:.1f} }},\n",
                        stop.t_s, core::to_mm(stop.depth_m), core::to_mm(stop.closing_speed_m_s));
  return text + "]\n";
}

std::string truth_lines(const Scene& scene, const Truth& truth) {
  std::string text = fmt::format(
      "# What truly happened on this invented ride; bands at the default split.\n"
      "schema = \"clickwise-truth-1\"\nseed = {}\nduration_s = {:.3f}\nriding_from_s = {:.3f}\n"
      "riding_to_s = {:.3f}\ndistance_m = {:.2f}\n",
      scene.seed, static_cast<double>(truth.samples()) / truth.rate_hz, truth.progress.ride_begin_s,
      truth.progress.ride_end_s, truth.progress.distance_m.back());
  for (const auto name : bike::both_ends)
    if (truth.end(name))
      text += end_lines(bike::to_string(name), truth_figures(scene, truth, name));
  return text;
}

void write_log_file(const Scene& scene, const Truth& truth, const std::string& path) {
  WholeFile file(path);
  write_log(scene.bike, scene.logger, truth, [&](std::string_view piece) { file.write(piece); });
  file.commit();
}

}  // namespace

std::vector<std::string> write_ride(const Scene& scene, const Truth& truth,
                                    const std::string& folder) {
  std::error_code error;
  std::filesystem::create_directories(folder, error);
  if (error)
    throw core::JobError({folder}, "this folder cannot be made", "check its path and permissions");
  std::vector<std::string> paths;
  for (const char* name : {"log.csv", "bike.toml", "truth.csv", "truth.toml"})
    paths.push_back((std::filesystem::path(folder) / name).string());
  write_log_file(scene, truth, paths[0]);
  write_whole(paths[1], scene.bike.text);
  write_truth_table(truth, paths[2]);
  write_whole(paths[3], truth_lines(scene, truth));
  return paths;
}

}  // namespace clickwise::sim
