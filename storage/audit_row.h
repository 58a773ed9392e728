// One line of the audit trail; store.h brings it.
#pragma once

#include <cstdint>
#include <string>

namespace hearthfront::storage {

struct AuditRow {
  std::int64_t at_us = 0;
  std::string person, action, subject, before_json, after_json;
};

}  // namespace hearthfront::storage
