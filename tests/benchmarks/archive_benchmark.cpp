// How much faster a run is read back from its archive than from its text log.
//   archive_benchmark LOG BIKE.toml RUN.h5
#include <fmt/format.h>

#include <algorithm>
#include <chrono>
#include <ctime>
#include <filesystem>
#include <functional>

#include "clickwise/archive/run_archive.hpp"
#include "clickwise/bike/bike_file.hpp"
#include "clickwise/logs/log.hpp"
#include "clickwise/workflow/import_run.hpp"

namespace {

struct Cost {
  double wall_s = 1e9;
  double processor_s = 1e9;
};

Cost cheaper(const Cost& before, const std::function<void()>& job) {
  const auto start = std::chrono::steady_clock::now();
  const std::clock_t used = std::clock();
  job();
  const std::chrono::duration<double> wall = std::chrono::steady_clock::now() - start;
  return {std::min(before.wall_s, wall.count()),
          std::min(before.processor_s, static_cast<double>(std::clock() - used) / CLOCKS_PER_SEC)};
}

void print(const char* what, const Cost& cost) {
  fmt::print("{:<44} {:8.4f} s {:8.4f} s of processor\n", what, cost.wall_s, cost.processor_s);
}

void print_ratio(const char* what, const Cost& slow, const Cost& fast) {
  fmt::print("{:<44} {:8.1f}   {:8.1f}\n", what, slow.wall_s / fast.wall_s,
             slow.processor_s / fast.processor_s);
}

}  // namespace

int main(int argc, char** argv) {
  if (argc != 4) return 2;
  using namespace clickwise;
  const std::string log = argv[1], bike_path = argv[2], run = argv[3];
  workflow::import_run({{log, bike_path, {}}, run, "archive_benchmark"});
  const bike::Bike bike = bike::read_bike_file(bike_path);
  std::vector<bike::ColumnRef> columns;
  for (const bike::EndName name : bike::both_ends)
    if (bike.end(name)) columns.push_back(bike.end(name)->sensor.column);
  if (bike.log.speed) columns.push_back(bike.log.speed->column);
  Cost text, archived, from_log, from_archive;
  for (int round = 0; round < 15; ++round) {
    text = cheaper(text, [&] { logs::read_log(log, bike.log, columns); });
    archived = cheaper(archived, [&] { archive::read_archive(run); });
    from_log = cheaper(from_log, [&] { workflow::load_ride({log, bike_path, {}}); });
    from_archive = cheaper(from_archive, [&] { workflow::load_ride({run, "", {}}); });
  }
  fmt::print("log {:.1f} MB, archive {:.1f} MB; best of 15\n",
             static_cast<double>(std::filesystem::file_size(log)) / 1e6,
             static_cast<double>(std::filesystem::file_size(run)) / 1e6);
  print("text to readings", text);
  print("archive to motion, the file alone", archived);
  print("text log to a run ready for figures", from_log);
  print("archive to a run ready for figures", from_archive);
  print_ratio("a run from the log, over from the archive", from_log, from_archive);
  print_ratio("readings from the text, over the archive", text, archived);
}
