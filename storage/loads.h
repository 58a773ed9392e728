// The rows of load, load_stay, load_revision, load_note, result and audit, as the writer changes them inside
// its transaction. Each function is one job that stands or falls alone: the writer runs it in a savepoint.
//
// Threads: writer thread only. StorageError misuse = the request does not fit what is stored; nothing of it
// stays.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "storage/store.h"

namespace hearthfront::storage {

class Connection;

std::int64_t insert_load(Connection& connection, const LoadRow& row, std::vector<Stay> stays, AuditRow audit);
void revise_loads(Connection& connection, const std::vector<LoadChange>& changes,
                  const std::vector<AuditRow>& audits, const std::optional<PushRow>& push);
void revise_load(Connection& connection, std::int64_t id, std::int64_t expected_revision,
                 const std::string& definition_json, std::optional<std::int64_t> ended_us, AuditRow audit);
std::int64_t insert_note(Connection& connection, const LoadNote& note);
void insert_result(Connection& connection, const ResultRow& row);
void insert_audit(Connection& connection, const AuditRow& row);

}  // namespace hearthfront::storage
