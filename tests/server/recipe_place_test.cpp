// Where in its recipe a furnace is. The rules are the project's own; how near a furnace holds its set points
// is common practice, no source.
#include <doctest/doctest.h>

#include "server/live/recipe_place.h"

using namespace hearthfront::server;

namespace {

constexpr std::int64_t minute_us = 60'000'000;

Segment segment(const char* name, double minutes, double degc, double carbon) {
  Segment s;
  s.name = name;
  s.duration_min = minutes;
  s.temperature_degc = degc;
  s.carbon_potential_wt_pct = carbon;
  return s;
}

Recipe boost_diffuse() {
  return {
      "r",
      {segment("boost", 100, 930, 1.1), segment("diffuse", 50, 930, 0.8), segment("equalize", 30, 850, 0.75)},
      {}};
}

struct Walk {
  Recipe recipe;
  RecipePlace place{0};
  int minute = 0;

  explicit Walk(Recipe r) : recipe(std::move(r)) {}
  void see(double degc, double carbon, int minutes, bool due = false) {
    for (int i = 0; i < minutes; ++i, ++minute)
      place.step(recipe, {minute * minute_us, (minute + 1) * minute_us, degc, carbon}, due);
  }
  void silent(int minutes) {
    for (int i = 0; i < minutes; ++i, ++minute)
      place.step(recipe, {minute * minute_us, (minute + 1) * minute_us, {}, {}}, false);
  }
  std::string now() const { return recipe.segments[place.now().index].name; }
  double started_min() const { return static_cast<double>(place.now().from_us) / minute_us; }
};

}  // namespace

TEST_CASE("without readings the recipe's own times say where it is, to the second") {
  Walk walk(boost_diffuse());
  walk.recipe.segments[0].duration_min = 99.5;
  walk.silent(120);
  CHECK(walk.now() == "diffuse");
  CHECK(walk.started_min() == doctest::Approx(99.5));
  CHECK(walk.place.now().by == PlacedBy::recipe_time);
  CHECK(walk.place.minutes_left(walk.recipe, walk.minute * minute_us) == doctest::Approx(59.5));
}

TEST_CASE("a furnace that goes on early is followed by its readings") {
  Walk walk(boost_diffuse());
  walk.see(930, 1.1, 80);
  walk.see(930, 0.95, 3);  // on the way down
  walk.see(930, 0.8, 10);
  CHECK(walk.now() == "diffuse");
  CHECK(walk.place.now().by == PlacedBy::readings);
  CHECK(walk.started_min() == doctest::Approx(80));
}

TEST_CASE("a furnace that stays longer is not moved on by the clock, and is called long past its tolerance") {
  Walk walk(boost_diffuse());
  walk.see(930, 1.1, 108);
  CHECK(walk.now() == "boost");
  CHECK(walk.place.long_by_min(walk.recipe, walk.minute * minute_us) == 0);
  walk.see(930, 1.1, 17);
  CHECK(walk.place.long_by_min(walk.recipe, walk.minute * minute_us) == doctest::Approx(25));
  CHECK(walk.place.segment_left_min(walk.recipe, walk.minute * minute_us) == 0);
  walk.see(930, 0.8, 6);
  CHECK(walk.now() == "diffuse");
  CHECK(walk.started_min() == doctest::Approx(125));
}

TEST_CASE("segments that read alike are told apart by time alone") {
  Recipe recipe{"r", {segment("boost 1", 60, 930, 1.1), segment("boost 2", 60, 930, 1.05)}, {}};
  Walk walk(recipe);
  walk.see(930, 1.1, 61);
  CHECK(walk.now() == "boost 2");
  CHECK(walk.place.now().by == PlacedBy::recipe_time);
}

TEST_CASE("a gas that passes the next segment's set point on its way up is not there yet") {
  Walk walk(boost_diffuse());
  walk.see(930, 0.6, 5);
  walk.see(930, 0.8, 8);  // slowly through 0.8
  walk.see(930, 1.1, 10);
  CHECK(walk.now() == "boost");
  CHECK(walk.place.doubt(walk.recipe).empty());
}

TEST_CASE("a short disturbance of the gas is no change of segment") {
  Walk walk(boost_diffuse());
  walk.see(930, 1.1, 40);
  walk.see(930, 0.8, 3);
  walk.see(930, 1.1, 20);
  CHECK(walk.now() == "boost");
}

TEST_CASE("a furnace that reads like no segment is said to be nowhere, and which one it reads like") {
  Walk walk(boost_diffuse());
  walk.see(930, 1.1, 30);
  CHECK(walk.place.doubt(walk.recipe).empty());
  walk.see(905, 0.95, 14);
  CHECK(walk.place.doubt(walk.recipe).empty());
  walk.see(905, 0.95, 6);
  CHECK(walk.place.doubt(walk.recipe).find("905 degC") != std::string::npos);
  walk.see(930, 1.1, 1);
  CHECK(walk.place.doubt(walk.recipe).empty());
  walk.see(850, 0.75, 20);
  CHECK(walk.place.doubt(walk.recipe).find("It reads like segment \"equalize\"") != std::string::npos);
}

TEST_CASE("a furnace that is heating up towards its set point leaves no doubt") {
  Walk walk(boost_diffuse());
  for (int m = 0; m < 60; ++m) walk.see(800 + 2 * m, 0.5, 1);
  CHECK(walk.place.doubt(walk.recipe).empty());
}

TEST_CASE(
    "a segment with an end of its own ends when the model says so, at the latest after its longest time") {
  Recipe recipe = boost_diffuse();
  recipe.segments[0].until = Until{Until::Kind::case_depth, "A", 0.8};
  recipe.segments[0].longest_min = 150;
  Walk early(recipe);
  early.silent(60);
  early.place.step(recipe, {60 * minute_us, 61 * minute_us, {}, {}}, true);
  CHECK(early.now() == "diffuse");
  CHECK(early.place.now().by == PlacedBy::model);
  CHECK(early.started_min() == doctest::Approx(61));

  Walk never(recipe);
  never.silent(149);
  CHECK(never.now() == "boost");
  never.silent(2);
  CHECK(never.now() == "diffuse");
  CHECK(never.started_min() == doctest::Approx(150));

  // Reached, but the furnace still boosts: it is due, and soon long.
  Walk waiting(recipe);
  waiting.see(930, 1.1, 60);
  waiting.see(930, 1.1, 20, true);
  CHECK(waiting.now() == "boost");
  CHECK(waiting.place.long_by_min(recipe, 80 * minute_us) == doctest::Approx(19));
}

TEST_CASE("set points along a ramp run straight from those before") {
  Recipe recipe = boost_diffuse();
  recipe.segments[2].ramp_min = 20;
  RecipePlace place(0);
  place.step(recipe, {0, 155 * minute_us, {}, {}}, false);
  REQUIRE(place.now().index == 2);
  // From 150 to 160 min: 930 falling by 4 K a minute, on average 20 K below.
  const SetPoints half = place.planned_means(recipe, 150 * minute_us, 160 * minute_us);
  CHECK(half.temperature_degc == doctest::Approx(910));
  CHECK(half.carbon_potential_wt_pct == doctest::Approx(0.8 - 0.0125));
  // From 165 to 175: half on the ramp (860 to 850), half at 850.
  CHECK(place.planned_means(recipe, 165 * minute_us, 175 * minute_us).temperature_degc ==
        doctest::Approx(855));
  CHECK(place.planned_means(recipe, 300 * minute_us, 310 * minute_us).temperature_degc ==
        doctest::Approx(850));
}

TEST_CASE("several segments may pass within one long silent interval") {
  RecipePlace place(0);
  const Recipe recipe = boost_diffuse();
  place.step(recipe, {0, 1000 * minute_us, {}, {}}, false);
  CHECK(place.now().index == 2);
  CHECK(place.now().from_us == 150 * minute_us);
  CHECK(place.runs().size() == 3);
  CHECK(place.minutes_left(recipe, 1000 * minute_us) == doctest::Approx(180 - 1000));
}
