#include "server/api/api.h"

#include <charconv>

#include "server/api/assets.h"
#include "server/api/documents.h"
#include "server/ingest/storage_problem.h"
#include "server/live/definition_json.h"

namespace hearthfront::server {

Api::Api(ApiParts parts) : parts_(std::move(parts)), readers_(parts_.store.path()) {}

void Api::add_routes() {
  add_system_routes();
  add_reading_routes();
  add_csv_routes();
  add_load_routes();
  add_view_routes();
  add_furnace_routes();
  add_channel_routes();
  add_library_routes();
  add_outlook_routes();
  add_alert_routes();
}

std::string Api::floor() const {
  return floor_json(parts_.plant, parts_.board, *parts_.alerts.list(),
                    {parts_.clock.now_us(), parts_.clock.speed(), parts_.board.sequence()});
}

Api::FoundLoad Api::find_load(const Request& request) {
  const std::string& text = request.path_parameters.at(0);
  std::int64_t id = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), id);
  auto reader = readers_.take();
  auto found = error == std::errc{} && end == text.data() + text.size() ? load_of(id, *reader) : std::nullopt;
  if (!found)
    throw Problem{404, "unknown-load", "There is no such load", "No load has the id \"" + text + "\".", ""};
  return std::move(*found);
}

std::optional<Api::FoundLoad> Api::load_of(std::int64_t id, storage::Reader& reader) const {
  auto row = reader.load(id);
  if (!row) return std::nullopt;
  auto definition = std::make_shared<const LoadDefinition>(read_stored_definition(row->definition_json));
  return FoundLoad{std::move(*row), std::move(definition)};
}

const Furnace& Api::find_furnace(const Request& request) const {
  const std::string& id = request.path_parameters.at(0);
  const Furnace* furnace = parts_.plant.furnace(id);
  if (!furnace)
    throw Problem{404, "unknown-furnace", "There is no such furnace",
                  "\"" + id + "\" is not in the plant file. GET /api/v1/furnaces lists the ids.", ""};
  return *furnace;
}

}  // namespace hearthfront::server
