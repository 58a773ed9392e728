// Where loads are: the rows of load_stay and push, as the writer changes them inside its transaction. The
// stays of a load are what its definition says, written anew with each revision.
//
// Threads: writer thread only. StorageError misuse = more loads than places, or the same push twice.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "storage/store.h"

namespace hearthfront::storage {

class Connection;

std::string utc_text(std::int64_t time_us);  // for messages; seconds

std::vector<Stay> stays_of(Connection& connection, std::int64_t load);
void remove_stays(Connection& connection, std::int64_t load);
void insert_stays(Connection& connection, const LoadRow& load, const std::vector<Stay>& stays);
void insert_push(Connection& connection, const PushRow& push);
void refuse_unseen(Connection& connection, const LineSeen& seen);

}  // namespace hearthfront::storage
