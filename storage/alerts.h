// Alerts, their events and the messages about them, as the writer changes them inside its transaction.
//
// Threads: the writer's. Failure: StorageError misuse for what the tables' rules forbid, SQLite::Exception
// else.
#pragma once

#include <cstdint>
#include <string>

#include "storage/store.h"

namespace hearthfront::storage {

class Connection;

void save_alerts(Connection& connection, const AlertWrite& write);
void note_delivery(Connection& connection, const DeliveryNote& note);
std::int64_t retry_stuck(Connection& connection, const std::string& target, const AuditRow& audit);

}  // namespace hearthfront::storage
