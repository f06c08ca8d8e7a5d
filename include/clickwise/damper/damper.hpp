// From the bike file's damper to its curve at any setting of its adjusters.
#pragma once

#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/damper/dyno_fit.hpp"
#include "clickwise/damper/law.hpp"

namespace clickwise::damper {

// An adjuster that this damper has. Fewer clicks out = firmer; 0 = closed.
struct AdjusterRange {
  bike::Adjuster adjuster = bike::Adjuster::low_speed_compression;
  int setting = 0;
  int clicks = 0;
  bool assumed = false;  // what the clicks move is a usual range, not measured
};

// Relative scatter of the force from one damper of a kind, or one day, to the next.
inline constexpr double written_scatter_share = 0.05;  // of a curve written in the bike file
inline constexpr double assumed_scatter_share = 0.25;  // of one that nobody measured; the most

// A damper whose curve is known, or assumed, for every setting.
class Damper {
public:
  // `end` must carry a damper. `sprung_mass_kg` (of this end) is needed by an assumed damper only.
  // A dyno table is fitted here (fit_dyno: some ms), so keep the result rather than ask again.
  // Throws core::JobError with a plain sentence when the damper cannot be laid out: an assumed one
  // without the masses and spring it is scaled by, a dyno table that does not fix a law.
  static Damper from(const bike::End& end, std::optional<double> sprung_mass_kg,
                     const core::Place& place);

  explicit Damper(bike::HydraulicDamper sides, bool assumed = false);

  // The curve at the present settings.
  Curve curve() const;

  // The curve with one adjuster at another setting, clamped to its range.
  Curve curve_with(bike::Adjuster adjuster, int setting) const;

  // This damper with one adjuster moved, for chains of changes.
  Damper with(bike::Adjuster adjuster, int setting) const;

  std::vector<AdjusterRange> adjusters() const;
  std::optional<AdjusterRange> adjuster(bike::Adjuster name) const;
  bool assumed() const { return assumed_; }
  const bike::HydraulicDamper& sides() const { return sides_; }

  // Relative, of the force that the curve gives, 0.02 to 0.25: what the dyno fit leaves open, or
  // the usual scatter of a curve that was written down, or assumed.
  double scatter_share() const;

  // Of a dyno damper; none otherwise.
  const DynoFit* fit() const { return fit_.get(); }

private:
  bike::HydraulicDamper sides_;
  bool assumed_ = false;
  std::shared_ptr<const DynoFit> fit_;
};

}  // namespace clickwise::damper
