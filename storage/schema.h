// The tables, as an ordered list of migrations that the program carries in itself. To change the schema, add
// an entry at the end of the list in schema.cpp; an entry that was ever released is never edited.
//
// Threads: called while a store opens, before any other thread knows the connection. A file of a newer
// program is refused (newer_schema, with the name of what is unknown), a foreign one as misuse.
#pragma once

#include <span>

namespace hearthfront::storage {

class Connection;

struct Migration {
  int version;  // consecutive from 1; kept in the file as PRAGMA user_version
  const char* name;
  const char* sql;
};

std::span<const Migration> migrations();

// The file's version; 0 = empty. Throws StorageError newer_schema or misuse (not our file).
int schema_version(Connection& connection, std::span<const Migration> known = migrations());

// Applies what is missing, each entry in its own transaction: a failure leaves the version before it.
void migrate(Connection& connection, std::span<const Migration> known = migrations());

}  // namespace hearthfront::storage
