// A bike file, read and checked: SI inside, defaults here and nowhere else.
#pragma once

#include <array>
#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "clickwise/bike/adjuster.hpp"
#include "clickwise/bike/column.hpp"
#include "clickwise/bike/imu.hpp"
#include "clickwise/core/errors.hpp"
#include "clickwise/core/polyline.hpp"

namespace clickwise::bike {

struct TimeColumn {
  ColumnRef column;
  double seconds_per_unit = 1.0;
};

struct SpeedColumn {
  ColumnRef column;
  double metres_per_second_per_unit = 1.0;
};

enum class FieldType { u8, i8, u16, i16, u32, i32, u64, i64, f32, f64 };

std::size_t size_of(FieldType type);

struct PackedField {
  std::string name;
  FieldType type = FieldType::u8;
};

// A log of frames without text: each the fields one after the other, without padding.
struct PackedFrames {
  bool big_endian = false;
  std::size_t header_bytes = 0;  // in front of the first frame
  std::vector<PackedField> frame;

  std::size_t frame_bytes() const;
};

// `[log]`: exactly one of time and rate_hz is set, and at most one of packed and hdf5_group; with
// neither the log is text.
struct LogFormat {
  std::optional<TimeColumn> time;
  std::optional<double> rate_hz;
  std::optional<SpeedColumn> speed;
  std::optional<PackedFrames> packed;
  std::optional<std::string> hdf5_group;
};

// Contract section 3: force = rate (preload + travel).
struct CoilSpring {
  double rate_n_m = 0.0;
  double preload_m = 0.0;
};

// force = area ((p + p_atm) (V / (V - area travel))^exponent - p_atm); p is gauge pressure and V
// the chamber at full extension.
struct AirSpring {
  double area_m2 = 0.0;
  double volume_m3 = 0.0;
  double pressure_pa = 0.0;
  double exponent = 1.3;
};

struct TableSpring {
  core::Polyline force_n;  // over travel in m
};

// Extra end-stop force over the last length of the stroke, growing with the square of its
// compression to end_force at full stroke.
struct Bumper {
  double length_m = 0.0;
  double end_force_n = 0.0;
};

struct Spring {
  std::variant<CoilSpring, AirSpring, TableSpring> kind;
  std::optional<Bumper> bumper;
};

// The clicks of one adjuster and what they move: the value at `setting` clicks out is
// closed + (open - closed) setting / clicks.
struct Clicks {
  double closed = 0.0;
  double open = 0.0;
  int clicks = 0;
  int setting = 0;

  double value(double at_setting) const {
    return closed + (open - closed) * at_setting / static_cast<double>(clicks);
  }
  double value() const { return value(setting); }
};

// One direction of the hydraulic law (contract section 3), SI: bleed in m/s at 100 N, valve in N,
// slope in N s/m, port in N s^2/m^2. A missing bleed passes nothing (a platform); a missing valve
// never opens.
struct HydraulicSide {
  std::optional<Clicks> bleed;  // or fixed_bleed
  std::optional<double> fixed_bleed_m_s;
  std::optional<Clicks> valve;  // or fixed_valve
  std::optional<double> fixed_valve_n;
  double slope_n_s_m = 0.0;  // required with a valve; > 0
  double port_n_s2_m2 = 0.0;
};

struct HydraulicDamper {
  HydraulicSide compression;
  HydraulicSide rebound;
};

// One row of a dyno table: signed as everywhere, positive in compression.
struct DynoPoint {
  double velocity_m_s = 0.0;  // not 0
  double force_n = 0.0;
  std::array<double, 4> setting{};  // clicks out, in the order of all_adjusters; NaN: not given
  int line = 0;                     // of the file
};

// Force-velocity points of a dynamometer, for the damper module to fit.
struct DynoDamper {
  std::string file;  // as written; relative to the bike file's folder
  std::string text;  // the file's, for the archive
  // Clicks and present setting of each adjuster (closed and open are 0): as the bike file counts
  // them, or else as the table's columns do.
  std::optional<Clicks> bleed_compression, valve_compression, bleed_rebound, valve_rebound;
  std::vector<DynoPoint> points = {};
  std::vector<std::string> notes = {};  // what was left out or taken for granted, sentences

  const std::optional<Clicks>& counted(Adjuster adjuster) const;
  std::optional<Clicks>& counted(Adjuster adjuster);
};

enum class CurveShape { digressive, linear, progressive };

// A damper nobody measured: a plausible curve of a damping ratio, plausible ranges of its clicks.
struct AssumedDamper {
  double damping_ratio = 0.30;
  CurveShape shape = CurveShape::digressive;
  std::optional<Clicks> bleed_compression, valve_compression, bleed_rebound, valve_rebound;
};

using Damper = std::variant<HydraulicDamper, DynoDamper, AssumedDamper>;

struct Potentiometer {
  ColumnRef column;
  core::Polyline travel_m;  // over the reading, increasing x; travel may rise or fall with it
};

// An accelerometer on the sprung side above the end: what it feels (specific force, +1 g at rest)
// upwards, in the wheel's direction of travel.
struct SprungAccel {
  ColumnRef column;
  bool in_g = true;   // else m/s^2
  bool is_up = true;  // reads +1 g at rest; else -1 g

  // m/s^2 felt, for each unit read; its sign by is_up.
  double m_s2_per_unit() const;
};

struct Tyre {
  double stiffness_n_m = 90e3;
  double damping_n_s_m = 150.0;
};

struct Split {
  std::optional<double> compression_m_s;
  std::optional<double> rebound_m_s;
};

// One end. Only stroke and sensor are required; what else is missing stays empty. The sensor is a
// potentiometer, an IMU pair, or both.
struct End {
  double stroke_m = 0.0;
  std::optional<double> unsprung_mass_kg;
  double friction_n = 0.0;
  std::optional<Tyre> tyre;
  core::Polyline ratio = core::Polyline::constant(1.0);  // d wheel / d shaft over shaft travel (m)
  double bottom_out_within_m = 4e-3;
  Split split;
  Potentiometer sensor;  // without a column where has_potentiometer() is false
  std::optional<ImuPair> imu;
  std::optional<SprungAccel> sprung_accel;
  std::optional<Spring> spring;
  std::optional<Damper> damper;
  core::Place damper_place;  // of its table, for messages

  bool has_potentiometer() const { return sensor.column != ColumnRef{}; }
};

// Aims of the advice, settable in `[aims]`; each has a default from common practice, no source.
struct Aims {
  double bottom_outs_per_minute = 0.5;   // at most
  double travel_mean_share_low = 0.18;   // of the stroke: below it the end rides high
  double travel_mean_share_high = 0.38;  // above it the end rides deep
  double travel_used_share = 0.90;       // largest travel at least this share of the stroke
  double packing_mm_per_hit = 2.0;       // climb of the start travel within a hit train
  double top_outs_per_minute = 25.0;     // at most
  double body_damping_low = 0.20;        // damping ratio of the body on this end, at least
  double harsh_force_ratio = 3.0;        // damper force at p95 over static load, at most
  double held_share = 0.45;              // of riding time standing still, at most
  double balance_share = 0.06;           // |front - rear| of mean travel over stroke, at most
};

struct Bike {
  std::string file;  // path as given; for messages
  std::string text;  // the file's text, for the archive
  std::string name;
  LogFormat log;
  std::optional<double> rider_mass_kg;
  std::optional<Accelerometer> hand_accel;  // on the handlebar
  std::optional<double> chassis_mass_kg;
  std::optional<double> front_share;
  std::optional<double> wheelbase_m;
  std::optional<End> front;
  std::optional<End> rear;
  Aims aims;

  const std::optional<End>& end(EndName name) const {
    return name == EndName::front ? front : rear;
  }
  std::optional<End>& end(EndName name) { return name == EndName::front ? front : rear; }

  // Sprung mass carried by one end's wheel, kg: (rider + chassis - the unsprung masses of the ends
  // present) shared by front_share. Empty when one of the figures is missing.
  std::optional<double> sprung_mass_kg(EndName name) const;
};

}  // namespace clickwise::bike
