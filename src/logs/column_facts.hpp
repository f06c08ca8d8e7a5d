// What one column holds, and what the clock is worth.
#pragma once

#include "clickwise/io/delimited.hpp"
#include "clickwise/logs/clock.hpp"
#include "clickwise/logs/facts.hpp"
#include "guess_time.hpp"

namespace clickwise::logs {

// Everything but the column's name, number and example. `advance` is set too.
ColumnFacts describe(const io::Column& column, io::CellKind cells, Advance& advance);

void describe_clock(LogFacts& facts, const Clock& clock);

}  // namespace clickwise::logs
