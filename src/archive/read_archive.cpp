#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "clickwise/archive/run_archive.hpp"
#include "clickwise/core/errors.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/io/hdf5_file.hpp"
#include "clickwise/io/mapped_file.hpp"
#include "names.hpp"

namespace clickwise::archive {

namespace {

// An archive being read: every part is needed, and named where it is missing.
class Reader {
public:
  explicit Reader(const std::string& path) : file_(path) {}

  [[noreturn]] void refuse(const std::string& wrong) const {
    throw core::InputError({file_.path()}, "this archive is damaged: " + wrong,
                           "take it from a backup, or import the log again");
  }

  std::string text_attribute(const std::string& name, const char* attribute) const {
    const auto text = file_.text_attribute(name, attribute);
    if (!text) refuse(fmt::format("the attribute {} of {} is missing", attribute, name));
    return *text;
  }

  double number_attribute(const std::string& name, const char* attribute) const {
    const auto number = file_.number_attribute(name, attribute);
    if (!number) refuse(fmt::format("the attribute {} of {} is missing", attribute, name));
    return *number;
  }

  double positive_attribute(const std::string& name, const char* attribute) const {
    const double number = number_attribute(name, attribute);
    if (!(number > 0.0 && std::isfinite(number)))
      refuse(fmt::format("the attribute {} of {} is not above 0", attribute, name));
    return number;
  }

  void need(const std::string& name) const {
    if (!file_.has(name)) refuse(name + " is missing");
  }

  std::vector<std::uint8_t> mask(const std::string& name, std::size_t samples) const {
    need(name);
    std::vector<std::uint8_t> values = file_.bytes(name);
    check_length(name, values.size(), samples);
    if (!values.empty() && *std::max_element(values.begin(), values.end()) > 1)
      refuse(name + " holds other values than 0 and 1");
    return values;
  }

  void check_length(const std::string& name, std::size_t has, std::size_t samples) const {
    if (has != samples) refuse(fmt::format("{} holds {} of {} samples", name, has, samples));
  }

  const io::Hdf5File& file() const { return file_; }

private:
  io::Hdf5File file_;
};

TextFile read_text(const Reader& reader, const std::string& name) {
  reader.need(name);
  return {reader.text_attribute(name, "file"), reader.file().text(name)};
}

void read_head(const Reader& reader, Run& run) {
  run.created = reader.text_attribute("/", "created");
  run.program = reader.text_attribute("/", "program");
  run.bike = read_text(reader, "/bike");
  if (!reader.file().has("/beside_bike")) return;
  for (const io::Hdf5Item& item : reader.file().items("/beside_bike"))
    run.beside.push_back(read_text(reader, "/beside_bike/" + item.name));
}

void read_faults(const Reader& reader, run::FaultLedger& faults) {
  const std::string group = "/log/faults";
  for (const char* name : {"/kind", "/channel", "/count", "/seconds"}) reader.need(group + name);
  const auto kinds = reader.file().texts(group + "/kind");
  const auto channels = reader.file().texts(group + "/channel");
  const auto counts = reader.file().numbers(group + "/count");
  const auto seconds = reader.file().numbers(group + "/seconds");
  if (channels.size() != kinds.size() || counts.size() != kinds.size() ||
      seconds.size() != kinds.size())
    reader.refuse("the columns of /log/faults differ in length");
  for (std::size_t i = 0; i < kinds.size(); ++i) {
    const auto kind = run::fault_kind_from(kinds[i]);
    if (!kind) reader.refuse(fmt::format("/log/faults has the unknown kind \"{}\"", kinds[i]));
    faults.add(*kind, channels[i], std::llround(counts[i]), seconds[i]);
  }
}

void read_log(const Reader& reader, Run& run) {
  run.log_name = reader.text_attribute("/log", "name");
  run.duration_s = reader.number_attribute("/log", "duration_s");
  const double samples = reader.positive_attribute("/log", "samples");
  if (samples > 1e15) reader.refuse("the attribute samples of /log is no count");
  run.samples = static_cast<std::size_t>(samples);
  reader.need("/log/notes");
  run.notes = reader.file().texts("/log/notes");
  read_faults(reader, run.faults);
}

void read_time(const Reader& reader, Run& run) {
  reader.need("/time");
  const auto items = reader.file().items("/");
  const auto time = std::find_if(items.begin(), items.end(),
                                 [](const io::Hdf5Item& item) { return item.name == "time"; });
  if (time == items.end() || time->shape.size() != 1 || time->shape[0] < 2)
    reader.refuse("/time is no axis of two samples or more");
  run.time = {reader.number_attribute("/time", "start_s"),
              reader.positive_attribute("/time", "rate_hz"), time->shape[0]};
  if (!std::isfinite(run.time.start_s))
    reader.refuse("the attribute start_s of /time is no number");
  run.riding = reader.mask("/riding", run.time.samples);
}

std::optional<EndOfRun> read_end(const Reader& reader, const std::string& group,
                                 const run::TimeBase& time) {
  if (!reader.file().has(group)) return std::nullopt;
  EndOfRun end;
  run::Motion& motion = end.motion;
  motion.time = time;
  const auto source = source_from(reader.text_attribute(group, "measured_by"));
  if (!source) reader.refuse("the attribute measured_by of " + group + " is an unknown word");
  motion.source = *source;
  motion.valid = reader.mask(group + "/valid", time.samples);
  const auto in_mm = [&](const char* name) {
    return core::from_mm(reader.number_attribute(group, name));
  };
  end.stroke_m = in_mm("stroke_mm");
  motion.velocity_noise_m_s = in_mm("velocity_noise_mm_s");
  motion.reading_noise_m = in_mm("reading_noise_mm");
  motion.cutoff_hz = reader.number_attribute(group, "cutoff_hz");
  motion.smoothing = reader.text_attribute(group, "smoothing");
  motion.travel_withheld = reader.file().text_attribute(group, "travel_withheld").value_or("");
  motion.travel_known = motion.travel_withheld.empty();
  return end;
}

// The series of both ends and the speed, at once.
void read_series(const Reader& reader, Run& run) {
  std::vector<io::Hdf5Scaled> wanted;
  std::vector<std::vector<double>*> homes;
  const auto want = [&](const std::string& name, double scale, std::vector<double>& home) {
    reader.need(name);
    wanted.push_back({name, scale});
    homes.push_back(&home);
  };
  const auto want_end = [&](const std::string& group, std::optional<EndOfRun>& end) {
    if (!end) return;
    want(group + "/travel_mm", core::metres_per_mm, end->motion.travel_m);
    want(group + "/velocity_mm_s", core::metres_per_mm, end->motion.velocity_m_s);
    want(group + "/velocity_sigma_mm_s", core::metres_per_mm, end->motion.velocity_sigma_m_s);
    if (reader.file().has(group + "/felt_m_s2")) want(group + "/felt_m_s2", 1.0, end->felt_m_s2);
  };
  want_end("/front", run.front);
  want_end("/rear", run.rear);
  if (reader.file().has("/speed_m_s")) want("/speed_m_s", 1.0, run.speed_m_s);
  auto values = reader.file().numbers(wanted);
  for (std::size_t i = 0; i < homes.size(); ++i) {
    reader.check_length(wanted[i].name, values[i].size(), run.time.samples);
    *homes[i] = std::move(values[i]);
  }
}

}  // namespace

bool is_archive(const std::string& path) {
  if (!io::is_hdf5(io::MappedFile(path).text())) return false;
  const auto found = io::Hdf5File(path).text_attribute("/", "schema");
  return found && found->starts_with(any_schema);
}

Run read_archive(const std::string& path) {
  const Reader reader(path);
  const std::string found = reader.file().text_attribute("/", "schema").value_or("");
  if (found != schema) {
    if (!found.starts_with(any_schema))
      throw core::InputError({path}, "this HDF5 file is no archive of this program",
                             "give a file that clickwise import wrote");
    throw core::InputError(
        {path},
        fmt::format("this archive is of another version (schema \"{}\", written by {}); this "
                    "program reads \"{}\"",
                    found,
                    reader.file().text_attribute("/", "program").value_or("an unknown program"),
                    schema),
        "use the program that wrote it, or import the log again with this one");
  }
  Run run;
  read_head(reader, run);
  read_log(reader, run);
  read_time(reader, run);
  run.front = read_end(reader, "/front", run.time);
  run.rear = read_end(reader, "/rear", run.time);
  if (!run.front && !run.rear) reader.refuse("neither /front nor /rear is there");
  read_series(reader, run);
  return run;
}

}  // namespace clickwise::archive
