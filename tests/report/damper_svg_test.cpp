// The drawing of a damper's families of curves: what is drawn, and where.
#include "clickwise/report/damper_svg.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <regex>

#include "clickwise/report/damper_text.hpp"
#include "support/random_damper.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;

namespace {

workflow::DamperReport report_of(const bike::HydraulicDamper& sides) {
  workflow::DamperReport report;
  report.bike_name = "Larch <& co>";
  for (int i = 0; i <= 120; ++i) report.family_speed_m_s.push_back(i / 40.0);
  const damper::Damper damper(sides);
  workflow::EndDamper end;
  end.table = damper::effect_table(damper, damper::usual_speeds_m_s());
  end.families = damper::families(damper, report.family_speed_m_s);
  report.ends.push_back(end);
  return report;
}

std::vector<std::string> all(const std::string& svg, const std::string& pattern) {
  std::vector<std::string> found;
  const std::regex wanted(pattern);
  for (std::sregex_iterator at(svg.begin(), svg.end(), wanted), end; at != end; ++at)
    found.push_back((*at)[1]);
  return found;
}

}  // namespace

TEST_CASE("a drawing has one line a setting, each inside the sheet, and is told without colour",
          "[report][damper]") {
  test::RandomDampers random(4);
  for (int i = 0; i < 20; ++i) {
    const auto report = report_of({random.side(), random.side()});
    const std::string svg = report::damper_svg(report);
    std::size_t curves = 0;
    for (const auto& family : report.ends[0].families) curves += family.curves.size();
    REQUIRE(curves >= 4 * 4);
    CHECK(all(svg, "<polyline ([^>]*)").size() == curves);
    CHECK(all(svg, "stroke-width=\"(3)\"").size() == 4);
    const double width = std::stod(all(svg, "width=\"([0-9]+)\"")[0]);
    const double height = std::stod(all(svg, "height=\"([0-9]+)\"")[0]);
    for (const std::string& points : all(svg, "points=\"([^\"]*)\"")) {
      std::size_t at = 0;
      while (at < points.size()) {
        std::size_t read = 0;
        const double x = std::stod(points.substr(at), &read);
        at += read + 1;
        const double y = std::stod(points.substr(at), &read);
        at += read + 1;
        CHECK((x > 0.0 && x < width && y > 0.0 && y < height));
      }
    }
    CHECK_THAT(svg, !Contains("nan") && !Contains("inf") && Contains("Larch &lt;&amp; co&gt;"));
  }
}

TEST_CASE("the families in the text are the curve at those settings", "[report][damper]") {
  bike::HydraulicSide side;
  side.bleed = bike::Clicks{0.012, 0.190, 16, 8};
  side.fixed_valve_n = 380.0;
  side.slope_n_s_m = 180.0;
  const std::string text = report::damper_text(report_of({side, side}));
  CHECK_THAT(text, Contains("Across low-speed compression, clicks out, N (* now)"));
  CHECK_THAT(text, Contains("        0         4         8*       12        16"));
  // At 50 mm/s. Closed, the valve is open: s^2 + 0.216 s - 389 = 0, s = 19.616, F = s^2 = 384.8 N.
  // At 8 and 16 clicks the bleed alone passes it: 100 (50 / 101)^2 and 100 (50 / 190)^2 N.
  CHECK(all(text, "\n +50 +(384\\.8 +[0-9.]+ +24\\.5 +[0-9.]+ +6\\.9) *\n").size() == 2);
}
