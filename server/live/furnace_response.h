// What a furnace shows beside its set points, read off the last hour or so of a run.
#pragma once

#include "server/live/live_load.h"
#include "solver/outlook/outlook.h"

namespace hearthfront::server {

// Offsets are means over the last half hour in which the furnace had had time to follow its set points; a
// furnace that still heats has none, and its rate is what it shows.
solver::FurnaceResponse furnace_response(const LiveLoad& load);

}  // namespace hearthfront::server
