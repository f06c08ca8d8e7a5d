#include "clickwise/workflow/review.hpp"

#include <memory>

#include "clickwise/core/units.hpp"
#include "clickwise/report/review_html.hpp"
#include "clickwise/report/review_json.hpp"
#include "clickwise/report/review_text.hpp"
#include "command.hpp"

namespace clickwise::cli {

namespace {

struct Arguments {
  workflow::ReviewOptions options;
  double smooth_ms = 0.0;
  Output output;
};

void run_review(const Common& common, Arguments& arguments) {
  arguments.options.splits = workflow::parse_splits(common.splits);
  if (arguments.smooth_ms > 0.0)
    arguments.options.ride.smooth_span_s = arguments.smooth_ms * core::seconds_per_ms;
  const workflow::Review review = workflow::review(arguments.options);
  print(common, arguments.output, report::review_text(review, {emphasis_on_stdout()}));
  if (arguments.output.folder.empty() && arguments.output.json_file.empty()) return;
  const std::string json = report::review_json(review);
  write_json(arguments.output, json);
  if (arguments.output.folder.empty()) return;
  write_into(arguments.output.folder, "review.json", json);
  write_into(arguments.output.folder, "review.html", report::review_html(review));
}

}  // namespace

void add_review(CLI::App& app, Common& common) {
  auto arguments = std::make_shared<Arguments>();
  CLI::App* command =
      add_command(app, common, "review", "One run: bands, travel, events and what to turn");
  add_ride(*command, arguments->options.ride);
  command
      ->add_option("--smooth", arguments->smooth_ms,
                   "smoothing span chosen by hand instead of from the log, ms")
      ->type_name("MS")
      ->check(CLI::Range(0.1, 1000.0));
  command->add_flag("--by-rule", arguments->options.advice_by_rule,
                    "advise by rule, without riding the same ground again; saves some seconds");
  add_output(*command, arguments->output, "review.html and review.json");
  command->callback([&common, arguments] { run_review(common, *arguments); });
}

}  // namespace clickwise::cli
