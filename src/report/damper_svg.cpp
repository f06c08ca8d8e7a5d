#include "clickwise/report/damper_svg.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <numeric>

#include "clickwise/core/units.hpp"
#include "words.hpp"

namespace clickwise::report {

namespace {

// Sizes in the drawing's own units (pixels at 96 dpi).
constexpr double panel_width = 460.0;
constexpr double panel_height = 320.0;
constexpr double left = 62.0;
constexpr double right = 46.0;
constexpr double top = 46.0;
constexpr double bottom = 46.0;
constexpr double head = 64.0;
constexpr double label_height = 13.0;
constexpr std::size_t columns = 2;
constexpr std::array<const char*, 6> dashes{"none", "9 3", "5 3", "2 3", "9 3 2 3", "1 5"};

std::string escaped(const std::string& text) {
  std::string safe;
  for (const char c : text) {
    if (c == '<')
      safe += "&lt;";
    else if (c == '>')
      safe += "&gt;";
    else if (c == '&')
      safe += "&amp;";
    else if (static_cast<unsigned char>(c) >= ' ')
      safe += c;
  }
  return safe;
}

// 1, 2 or 5 times a power of ten, such that `most` takes at most six steps.
double tick_step(double most) {
  const double rough = most / 6.0;
  const double decade = std::pow(10.0, std::floor(std::log10(rough)));
  for (const double factor : {1.0, 2.0, 5.0})
    if (factor * decade >= rough) return factor * decade;
  return 10.0 * decade;
}

std::string text_at(double x, double y, const char* anchor, const std::string& text,
                    const char* more = "") {
  return fmt::format("<text x=\"{:.1f}\" y=\"{:.1f}\" text-anchor=\"{}\"{}>{}</text>\n", x, y,
                     anchor, more, escaped(text));
}

// One panel's plane: from speed and force to the drawing.
class Plane {
public:
  Plane(double x, double y, double most_m_s, double most_n)
      : x_(x + left),
        y_(y + panel_height - bottom),
        most_m_s_(most_m_s),
        step_n_(tick_step(most_n)) {
    most_n_ = step_n_ * std::ceil(most_n / step_n_);
  }

  double x(double speed_m_s) const {
    return x_ + (panel_width - left - right) * speed_m_s / most_m_s_;
  }
  double y(double force_n) const { return y_ - (panel_height - top - bottom) * force_n / most_n_; }

  std::string axes() const {
    std::string svg;
    for (double n = 0.0; n < most_n_ + 0.5 * step_n_; n += step_n_) {
      svg += line(x(0.0), y(n), x(most_m_s_), y(n), n == 0.0);
      svg += text_at(x(0.0) - 6.0, y(n) + 4.0, "end", fmt::format("{:g}", n));
    }
    const double step_m_s = tick_step(most_m_s_);
    for (double v = 0.0; v < most_m_s_ + 0.5 * step_m_s; v += step_m_s) {
      svg += line(x(v), y(0.0), x(v), y(most_n_), v == 0.0);
      svg += text_at(x(v), y(0.0) + 16.0, "middle", fmt::format("{:.0f}", core::to_mm(v)));
    }
    svg += text_at(x(0.5 * most_m_s_), y(0.0) + 34.0, "middle", "shaft speed, mm/s");
    return svg + text_at(x(0.0) - 6.0, y(most_n_) - 9.0, "end", "N");
  }

private:
  static std::string line(double x_1, double y_1, double x_2, double y_2, bool axis) {
    return fmt::format(
        "<line x1=\"{:.1f}\" y1=\"{:.1f}\" x2=\"{:.1f}\" y2=\"{:.1f}\" stroke=\"{}\"/>\n", x_1, y_1,
        x_2, y_2, axis ? "#000" : "#ccc");
  }

  double x_;
  double y_;
  double most_m_s_;
  double step_n_;
  double most_n_ = 0.0;
};

// Heights of the labels beside the lines' ends, apart by at least their own height, about the same
// middle.
std::vector<double> spread_out(std::vector<double> heights) {
  const auto sum = [&] { return std::accumulate(heights.begin(), heights.end(), 0.0); };
  const double before = sum();
  std::vector<std::size_t> order(heights.size());
  for (std::size_t i = 0; i < order.size(); ++i) order[i] = i;
  std::sort(order.begin(), order.end(),
            [&](std::size_t a, std::size_t b) { return heights[a] > heights[b]; });
  for (std::size_t k = 1; k < order.size(); ++k)
    heights[order[k]] = std::min(heights[order[k]], heights[order[k - 1]] - label_height);
  const double lower = (before - sum()) / static_cast<double>(heights.size());
  for (double& height : heights) height += lower;
  return heights;
}

std::string polyline(const Plane& plane, const std::vector<double>& speed_m_s,
                     const damper::FamilyCurve& curve, std::size_t which) {
  std::string points;
  for (std::size_t i = 0; i < speed_m_s.size(); ++i)
    points += fmt::format("{}{:.1f},{:.1f}", i ? " " : "", plane.x(speed_m_s[i]),
                          plane.y(curve.force_n[i]));
  return fmt::format(
      "<polyline fill=\"none\" stroke=\"#000\" stroke-width=\"{}\" stroke-dasharray=\"{}\" "
      "points=\"{}\"/>\n",
      curve.present ? "3" : "1.4", curve.present ? "none" : dashes[which % dashes.size()], points);
}

// A bleed shows at low speed; there its panel ends.
damper::Family shown_part(damper::Family family, std::vector<double>& speed_m_s) {
  constexpr double most_bleed_m_s = 1.0;
  if (!bike::is_bleed(family.range.adjuster)) return family;
  const auto end = std::upper_bound(speed_m_s.begin(), speed_m_s.end(), most_bleed_m_s + 1e-9);
  speed_m_s.erase(end, speed_m_s.end());
  for (auto& curve : family.curves) curve.force_n.resize(speed_m_s.size());
  return family;
}

std::string panel(const damper::Family& whole, bike::EndName end, std::vector<double> speed_m_s,
                  double x, double y) {
  const damper::Family family = shown_part(whole, speed_m_s);
  double most_n = 1.0;
  for (const auto& curve : family.curves)
    most_n = std::max(most_n, *std::max_element(curve.force_n.begin(), curve.force_n.end()));
  const Plane plane(x, y, speed_m_s.back(), most_n);
  std::string svg =
      text_at(x + left, y + 18.0, "start",
              fmt::format("{} {}: now {} of {} clicks out{}", part_words(end, true),
                          bike::words(family.range.adjuster), family.range.setting,
                          family.range.clicks, family.range.assumed ? " (range assumed)" : ""),
              " font-weight=\"bold\"");
  svg += plane.axes();
  std::vector<double> heights;
  for (const auto& curve : family.curves) heights.push_back(plane.y(curve.force_n.back()) + 4.0);
  heights = spread_out(std::move(heights));
  for (std::size_t i = 0; i < family.curves.size(); ++i) {
    svg += polyline(plane, speed_m_s, family.curves[i], i);
    svg += text_at(plane.x(speed_m_s.back()) + 6.0, heights[i], "start",
                   fmt::format("{}", family.curves[i].setting),
                   family.curves[i].present ? " font-weight=\"bold\"" : "");
  }
  return svg;
}

}  // namespace

std::string damper_svg(const workflow::DamperReport& report) {
  std::string panels;
  std::size_t count = 0;
  for (const workflow::EndDamper& end : report.ends) {
    for (const damper::Family& family : end.families) {
      panels += panel(family, end.name, report.family_speed_m_s,
                      panel_width * static_cast<double>(count % columns),
                      head + panel_height * static_cast<double>(count / columns));
      ++count;
    }
  }
  const double width = panel_width * columns;
  const double height = head + panel_height * static_cast<double>((count + columns - 1) / columns);
  std::string svg = fmt::format(
      "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{0:.0f}\" height=\"{1:.0f}\" "
      "viewBox=\"0 0 {0:.0f} {1:.0f}\" font-family=\"sans-serif\" font-size=\"12\">\n"
      "<rect width=\"100%\" height=\"100%\" fill=\"#fff\"/>\n",
      width, height);
  svg += text_at(16.0, 26.0, "start",
                 fmt::format("{}: damper force over shaft speed", report.bike_name),
                 " font-size=\"16\" font-weight=\"bold\"");
  svg += text_at(16.0, 46.0, "start",
                 count ? "One line a setting; the number at its end counts clicks out from closed; "
                         "the thick line is the present setting."
                       : "This damper has no adjuster.");
  return svg + panels + "</svg>\n";
}

}  // namespace clickwise::report
