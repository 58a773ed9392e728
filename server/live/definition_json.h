// Load definitions as JSON: the body that creates a load (and that replay reads), and the complete copy
// stored with it. Both are described in README.md; the checks are here. Pure, any thread.
#pragma once

#include <memory>
#include <string>
#include <string_view>

#include "server/live/load_definition.h"

namespace hearthfront::server {

// Reads a creation body against the plant; fills defaults and copies steels and furnace settings.
// Throws Problem: broken-json, invalid-load (with the member), unknown-furnace, unknown-steel.
LoadDefinition read_load_body(std::string_view body, const Plant& plant);

// The stored copy, and back. The copy holds everything; no plant is needed. Throws std::runtime_error where
// it cannot be read: to those who run loads that is a broken load, no answer to a client.
std::string stored_definition(const LoadDefinition& load);
LoadDefinition read_stored_definition(std::string_view stored);

// As it will be read back once it is stored. Throws Problem where it could not be: to be asked before a
// change is stored.
LoadDefinition as_stored(const LoadDefinition& load);

// The body again, with every default filled in, for clients (as JSON text).
std::string load_body(const LoadDefinition& load);

}  // namespace hearthfront::server
