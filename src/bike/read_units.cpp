#include <fmt/format.h>

#include "bike_readers.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::bike {

std::optional<double> read_either(const io::TomlTable& table, const TwoUnits& quantity) {
  const auto usual = table.find(quantity.key);
  const auto trade = table.find(quantity.trade_key);
  if (usual && trade)
    trade->refuse(fmt::format("{} is given as well", quantity.key), "keep one of the two");
  if (usual) return usual->number(quantity.limits) * quantity.si_per_unit;
  if (!trade) return std::nullopt;
  const double factor = quantity.si_per_unit / quantity.si_per_trade_unit;
  io::Limits limits = quantity.limits;
  limits.least *= factor;
  limits.most *= factor;
  limits.example = static_cast<double>(static_cast<long long>(limits.example * factor + 0.5));
  return trade->number(limits) * quantity.si_per_trade_unit;
}

double need_either(const io::TomlTable& table, const TwoUnits& quantity) {
  if (const auto value = read_either(table, quantity)) return *value;
  return table.need_number(quantity.key, quantity.limits);
}

TwoUnits mass(std::string_view key, std::string_view trade_key, double least_kg, double most_kg,
              double example_kg) {
  return {key,
          1.0,
          trade_key,
          core::kilograms_per_pound,
          {.least = least_kg, .most = most_kg, .example = example_kg}};
}

}  // namespace clickwise::bike
