// What is published about alerts: the active ones, as of one look. Never changes.
#pragma once

#include <cstdint>
#include <vector>

#include "storage/store.h"

namespace hearthfront::server {

// Worst first; those that nobody acknowledged before the others of their severity, shelved ones last.
struct AlertList {
  std::uint64_t sequence = 0;  // rises with every stored change
  std::vector<storage::AlertRow> active;
};

}  // namespace hearthfront::server
