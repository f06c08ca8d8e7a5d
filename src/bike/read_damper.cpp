#include <filesystem>

#include "bike_readers.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/io/mapped_file.hpp"

namespace clickwise::bike {

namespace {

constexpr long long most_clicks = 200;
constexpr io::Limits speeds_mm_s{.least = 0.0, .most = 1e5, .example = 190.0};
constexpr io::Limits forces_n{.least = 0.0, .most = 1e5, .example = 140.0};

void read_counts(const io::TomlTable& adjuster, Clicks& clicks) {
  clicks.clicks = static_cast<int>(adjuster.need("clicks", "clicks = 16").integer(1, most_clicks));
  clicks.setting =
      static_cast<int>(adjuster.need("setting", "setting = 8").integer(0, clicks.clicks));
}

void read_bleed(const io::TomlTable& bleed, HydraulicSide& side) {
  if (const auto fixed = bleed.number(
          "fixed_mm_s", {.least = 0.0, .most = 1e5, .ends_excluded = true, .example = 100.0})) {
    side.fixed_bleed_m_s = core::from_mm(*fixed);
    return;
  }
  Clicks clicks;
  clicks.closed = core::from_mm(bleed.need_number("closed_mm_s", speeds_mm_s));
  clicks.open = core::from_mm(bleed.need_number("open_mm_s", speeds_mm_s));
  read_counts(bleed, clicks);
  if (!(clicks.open > clicks.closed))
    bleed.find("open_mm_s")
        ->refuse("must be above closed_mm_s: an open bleed passes more",
                 "swap the two; settings count clicks out from closed");
  side.bleed = clicks;
}

void read_valve(const io::TomlTable& valve, HydraulicSide& side) {
  side.slope_n_s_m = valve.need_number(
      "slope_n_s_m", {.least = 0.0, .most = 1e6, .ends_excluded = true, .example = 180.0});
  if (const auto fixed = valve.number("fixed_n", forces_n)) {
    side.fixed_valve_n = *fixed;
    return;
  }
  Clicks clicks;
  clicks.closed = valve.need_number("closed_n", forces_n);
  clicks.open = valve.need_number("open_n", forces_n);
  read_counts(valve, clicks);
  if (!(clicks.open < clicks.closed))
    valve.find("open_n")->refuse("must be below closed_n: a valve turned out opens sooner",
                                 "swap the two; settings count clicks out from closed");
  side.valve = clicks;
}

HydraulicSide read_side(const io::TomlTable& table) {
  HydraulicSide side;
  if (const auto bleed = table.table("bleed")) read_bleed(*bleed, side);
  if (const auto valve = table.table("valve")) read_valve(*valve, side);
  if (const auto port = table.table("port"))
    side.port_n_s2_m2 = port->need_number("n_s2_m2", {.least = 0.0, .most = 1e6, .example = 22.0});
  if (!side.bleed && !side.fixed_bleed_m_s && !side.valve && !side.fixed_valve_n)
    table.refuse("without a bleed and a valve nothing can flow",
                 "add for example bleed = { closed_mm_s = 12.0, open_mm_s = 190.0, clicks = 16, "
                 "setting = 8 }");
  return side;
}

HydraulicDamper read_hydraulic(const io::TomlTable& damper) {
  const std::string name = damper.name();
  HydraulicDamper result;
  result.compression =
      read_side(damper.need_table("compression", "the table [" + name + ".compression]"));
  result.rebound = read_side(damper.need_table("rebound", "the table [" + name + ".rebound]"));
  return result;
}

// What a rider can count without knowing what it moves.
std::optional<Clicks> read_counted(const io::TomlTable& damper, const char* direction,
                                   const char* part) {
  const auto side = damper.table(direction);
  const auto adjuster = side ? side->table(part) : std::nullopt;
  if (!adjuster) return std::nullopt;
  Clicks clicks;
  read_counts(*adjuster, clicks);
  return clicks;
}

template <class CountedDamper>
void read_all_counted(const io::TomlTable& damper, CountedDamper& result) {
  result.bleed_compression = read_counted(damper, "compression", "bleed");
  result.valve_compression = read_counted(damper, "compression", "valve");
  result.bleed_rebound = read_counted(damper, "rebound", "bleed");
  result.valve_rebound = read_counted(damper, "rebound", "valve");
}

DynoDamper read_dyno(const io::TomlTable& damper, const FilesBeside& beside) {
  DynoDamper result;
  result.file = damper.need_text("file", "fork_dyno.csv");
  read_all_counted(damper, result);
  const auto folder = std::filesystem::path(damper.place().file).parent_path();
  const std::string path = (folder / result.file).string();
  const auto given = beside.find(result.file);
  std::error_code none;
  if (given != beside.end())
    result.text = given->second;
  else if (std::filesystem::exists(path, none))
    result.text = io::MappedFile(path).text();
  else
    damper.find("file")->refuse("there is no such file (looked for " + path + ")",
                                "put the dyno table beside the bike file, or name its folder too");
  read_dyno_table(path, result);
  return result;
}

AssumedDamper read_assumed(const io::TomlTable& damper) {
  AssumedDamper result;
  result.damping_ratio = damper.number_or("damping_ratio", result.damping_ratio,
                                          {.least = 0.01, .most = 2.0, .example = 0.3});
  const auto shape = damper.choice("shape", {"digressive", "linear", "progressive"});
  if (shape == "linear") result.shape = CurveShape::linear;
  if (shape == "progressive") result.shape = CurveShape::progressive;
  read_all_counted(damper, result);
  return result;
}

}  // namespace

Damper read_damper(const io::TomlTable& damper, const FilesBeside& beside) {
  const std::string kind = damper.need_choice("kind", {"hydraulic", "dyno", "assumed"});
  if (kind == "hydraulic") return read_hydraulic(damper);
  if (kind == "dyno") return read_dyno(damper, beside);
  return read_assumed(damper);
}

}  // namespace clickwise::bike
