// What a log's columns could be, guessed from their names and figures.
#pragma once

#include "clickwise/bike/starter.hpp"
#include "clickwise/logs/facts.hpp"

namespace clickwise::workflow {

// Triples of columns whose names differ in x, y and z are an IMU's: an accelerometer where the
// names say so or the mean vector has the size of gravity (0.5 to 1.5 g, in g or m/s2), a gyro
// where the names say so. A gyro's unit follows from its size: above 35 (the full scale of 2000
// deg/s in rad/s) or an rms above 6 it is deg/s. All guesses, for the user to check.
bike::StarterFacts starter_facts(const logs::LogFacts& facts);

}  // namespace clickwise::workflow
