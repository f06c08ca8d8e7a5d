// Texts of bike files for tests: the practice mule "Larch", whole and minimal.
#pragma once

#include <string>

namespace clickwise::test {

// schema, time, one stroke, one sensor: nothing else.
inline const std::string minimal_bike_text =
    "schema = \"clickwise-bike-1\"\n"
    "[log]\n"
    "time = { column = \"t_us\", unit = \"us\" }\n"
    "[front]\n"
    "stroke_mm = 170.0\n"
    "[front.sensor]\n"
    "kind = \"potentiometer\"\n"
    "column = \"fork_adc\"\n"
    "calibration = [[210, 0.0], [3850, 170.0]]\n";

// Every optional key of the contract's section 3; both ends.
inline const std::string larch_text = R"(schema = "clickwise-bike-1"
name = "Larch, practice mule"
[log]
time = { column = "t_us", unit = "us" }
speed = { column = "wheel_kmh", unit = "km/h" }
[rider]
mass_kg = 78.0
[chassis]
mass_kg = 16.2
front_share = 0.42
wheelbase_mm = 1245.0
[front]
stroke_mm = 170.0
unsprung_mass_kg = 2.9
friction_n = 15.0
sprung_accel = { column = "fork_az", unit = "m/s2", up = -1 }
tyre = { stiffness_n_mm = 90.0, damping_n_s_m = 150.0 }
ratio = 1.0
bottom_out = { within_mm = 4.0 }
split = { compression_mm_s = 700.0, rebound_mm_s = 650.0 }
[front.sensor]
kind = "potentiometer"
column = "fork_adc"
calibration = [[210, 0.0], [3850, 170.0]]
[front.spring]
kind = "table"
points = [[0, 90], [40, 300], [120, 760], [170, 1500]]
bumper = { length_mm = 12.0, end_force_n = 2500.0 }
[front.damper]
kind = "hydraulic"
[front.damper.compression]
bleed = { closed_mm_s = 12.0, open_mm_s = 190.0, clicks = 16, setting = 8 }
valve = { closed_n = 620.0, open_n = 140.0, clicks = 12, setting = 6, slope_n_s_m = 180.0 }
port = { n_s2_m2 = 22.0 }
[front.damper.rebound]
bleed = { closed_mm_s = 25.0, open_mm_s = 320.0, clicks = 18, setting = 9 }
valve = { fixed_n = 90.0, slope_n_s_m = 520.0 }
port = { n_s2_m2 = 30.0 }
[rear]
stroke_mm = 60.0
unsprung_mass_kg = 4.1
ratio = [[0, 3.0], [60, 2.4]]
[rear.sensor]
kind = "potentiometer"
column = 3
calibration = [[3900, 0.0], [2000, 31.0], [180, 60.0]]
[rear.spring]
kind = "air"
area_mm2 = 1100.0
volume_mm3 = 130000.0
pressure_psi = 160.0
exponent = 1.25
[rear.damper]
kind = "assumed"
damping_ratio = 0.30
shape = "digressive"
compression = { bleed = { clicks = 16, setting = 8 }, valve = { clicks = 12, setting = 6 } }
rebound = { bleed = { clicks = 18, setting = 9 } }
[aims]
travel_used_share = 0.85
)";

// The text with the first `from` replaced; the same text when it is not there.
inline std::string replaced(std::string text, const std::string& from, const std::string& to) {
  const auto at = text.find(from);
  if (at != std::string::npos) text.replace(at, from.size(), to);
  return text;
}

}  // namespace clickwise::test
