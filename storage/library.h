// What people decide about stored things: versions of library entries, choices between conflicting values,
// masks; as the writer changes them inside its transaction.
//
// Threads: writer thread only. StorageError misuse = the request does not fit what is stored.
#pragma once

#include <cstdint>
#include <vector>

#include "storage/store.h"

namespace hearthfront::storage {

struct Tables;

std::int64_t insert_library(Tables& tables, LibraryRow row, std::int64_t expected_version,
                            const AuditRow& audit);
void insert_choices(Tables& tables, const std::vector<Choice>& choices, const AuditRow& audit);
std::int64_t insert_mask(Tables& tables, const MaskRow& row, const AuditRow& audit);
void withdraw_mask(Tables& tables, std::int64_t id, const AuditRow& audit);

}  // namespace hearthfront::storage
