#include "clickwise/workflow/settings.hpp"

#include <catch2/catch.hpp>

#include "clickwise/bike/bike_file.hpp"
#include "clickwise/core/units.hpp"
#include "support/bike_text.hpp"

using namespace clickwise;

namespace {

bike::Bike larch() {
  return bike::parse_bike(test::larch_text, "larch.toml");
}

std::string refused(const std::vector<std::string>& texts) {
  bike::Bike bike = larch();
  try {
    workflow::apply_settings(bike, texts);
  } catch (const core::InputError& error) {
    return error.what();
  }
  return "";
}

}  // namespace

TEST_CASE("clicks are set by the adjuster's name", "[workflow]") {
  bike::Bike bike = larch();
  const auto changed = workflow::apply_settings(bike, {"front.low_speed_compression=4"});
  REQUIRE(changed.size() == 1);
  CHECK(changed[0].from == 8.0);
  CHECK(changed[0].to == 4.0);
  const auto& damper = std::get<bike::HydraulicDamper>(*bike.front->damper);
  CHECK(damper.compression.bleed->setting == 4);
}

TEST_CASE("masses are set in the units of their name", "[workflow]") {
  bike::Bike bike = larch();
  workflow::apply_settings(bike, {"rider.mass_lb=180"});
  CHECK(*bike.rider_mass_kg == Approx(180.0 * core::kilograms_per_pound));
}

TEST_CASE("a setting that the bike does not have is refused with the nearest one", "[workflow]") {
  CHECK(
      refused({"front.low_speed_compresion=4"}).find("did you mean front.low_speed_compression?") !=
      std::string::npos);
  CHECK(refused({"front.high_speed_rebound=2"}).find("this bike has no") != std::string::npos);
}

TEST_CASE("values out of range, parts of clicks and repeats are refused", "[workflow]") {
  CHECK(refused({"front.low_speed_compression=17"}).find("must be 0 to 16") != std::string::npos);
  CHECK(refused({"front.low_speed_compression=-1"}).find("must be 0 to 16") != std::string::npos);
  CHECK(refused({"front.low_speed_compression=3.5"}).find("clicks are whole") != std::string::npos);
  CHECK(refused({"front.low_speed_compression"}).find("has no value") != std::string::npos);
  CHECK(refused({"front.low_speed_compression=nan"}).find("is not a number") != std::string::npos);
  CHECK(refused({"rider.mass_kg=70", "rider.mass_kg=80"}).find("set twice") != std::string::npos);
}
