// The steels that tests use are those of the shipped library, so that what holds here holds for a user.
#include <doctest/doctest.h>

#include <cstdio>
#include <fstream>
#include <string>

#include "support/cycles.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

TEST_CASE("the tests' steels are the eight of config/steels.toml, with its compositions") {
  std::ifstream file(HF_SOURCE_DIR "/config/steels.toml");
  REQUIRE(file.is_open());
  std::size_t found = 0;
  std::string line, id;
  while (std::getline(file, line)) {
    char name[40];
    Composition c;
    if (std::sscanf(line.c_str(), "id = \"%39[^\"]\"", name) == 1) id = name;
    if (std::sscanf(line.c_str(),
                    "composition_wt_pct = {C = %lf, Mn = %lf, Cr = %lf, Ni = %lf, Mo = %lf, Si = %lf}",
                    &c.c_wt_pct, &c.mn_wt_pct, &c.cr_wt_pct, &c.ni_wt_pct, &c.mo_wt_pct, &c.si_wt_pct) != 6)
      continue;
    CAPTURE(id);
    const Composition used = case_steel(id.c_str()).composition;
    CHECK(used.c_wt_pct == c.c_wt_pct);
    CHECK(used.mn_wt_pct == c.mn_wt_pct);
    CHECK(used.cr_wt_pct == c.cr_wt_pct);
    CHECK(used.ni_wt_pct == c.ni_wt_pct);
    CHECK(used.mo_wt_pct == c.mo_wt_pct);
    CHECK(used.si_wt_pct == c.si_wt_pct);
    CHECK(in_low_alloy_range(c));
    ++found;
  }
  CHECK(found == 8);
  CHECK(found == case_steels().size());
}
