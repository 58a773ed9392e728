// JSON of the outlook, of trials and of proposals. Internal to server/api: brings nlohmann's header.
#pragma once

#include "server/api/document_parts.h"
#include "server/live/proposal.h"

namespace hearthfront::server {

Json outlook_json(const LoadDefinition& load, const LoadOutlook& outlook);
Json outlook_or_null(const LoadView& view);
// The controlling item's, for the floor.
Json floor_outlook_json(const LoadView& view, std::size_t item);
Json rest_json(const std::vector<Segment>& rest);
Json adopted_plans_json(const LoadDefinition& load);
// Curves along the plan; null where there is no outlook.
Json outlook_course_json(const LoadView& view);
std::string trial_json(const LoadDefinition& load, const LoadOutlook& present, const LoadOutlook& outlook);
std::string proposal_json(const LoadView& view, const Proposal& proposal, double asked_chance);

}  // namespace hearthfront::server
