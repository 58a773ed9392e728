// From carbon to the hardness of a finished case: plateau, retained austenite, temper, profile and depth.
#include "solver/material/case_hardness.h"

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>
#include <initializer_list>
#include <stdexcept>
#include <string>

#include "solver/material/hardness.h"
#include "solver/material/martensite.h"
#include "solver/section/hardness_profile.h"
#include "support/cycles.h"

using namespace hearthfront::solver;
using hearthfront::testing::case_steel;
using hearthfront::testing::case_steels;

namespace {

const HardnessTreatment martensite_alone{99, std::nullopt, std::nullopt};

// Boost and diffuse in the middle of the trade's range.
Profile carburized(const Composition& steel, double boost_potential, double diffuse_potential) {
  CarburizingPart part;
  part.section = {Shape::plate, 10e-3, 0};
  part.steel = steel;
  part.core_carbon_wt_pct = steel.c_wt_pct;
  part.beta_m_per_s = 1.3e-7;
  const GasCarburizing model(part, MeshDensity{});
  GasCarburizing::State state = model.start(930);
  hearthfront::testing::run(model, state, hearthfront::testing::constant_inputs(14400, 930, boost_potential));
  hearthfront::testing::run(model, state,
                            hearthfront::testing::constant_inputs(5400, 930, diffuse_potential));
  return read_profile(state.field, 0, state.conditions[0]);
}

}  // namespace

TEST_CASE(
    "martensite in HV: the table to 0.60 wt% C, then a rise to a plateau inside the published scatter") {
  for (double carbon : {0.1, 0.25, 0.4, 0.6})
    for (double share : {50.0, 90.0, 99.0})
      CHECK(martensite_hardness_hv(carbon, share) == *hv_from_hrc(martensite_hardness_hrc(carbon, share)));
  // Krauss', Jaffe and Gordon's compilations: 830-920 HV at 0.8 wt% C; 65-66 HRC (from memory).
  CHECK(martensite_hardness_hv(0.8, 99) == doctest::Approx(865).epsilon(1e-12));
  CHECK(martensite_hardness_hv(0.8, 99) > 830);
  CHECK(martensite_hardness_hv(0.8, 99) < 920);
  CHECK(martensite_hardness_hv(1.2, 99) == martensite_hardness_hv(0.8, 99));
  CHECK(martensite_hardness_hv(0.7, 99) > martensite_hardness_hv(0.6, 99));
  CHECK(martensite_hardness_hv(0.6 + 1e-9, 95) ==
        doctest::Approx(martensite_hardness_hv(0.6, 95)).epsilon(1e-8));
  CHECK(martensite_hardness_hv(0.8, 90) / martensite_hardness_hv(0.8, 99) ==
        doctest::Approx(martensite_hardness_hv(0.6, 90) / martensite_hardness_hv(0.6, 99)).epsilon(1e-12));
}

TEST_CASE("mixed hardness: 0.8 wt% C in 20MnCr5 with its retained austenite, 766 HV, 62.8 HRC (computed)") {
  const double hv = case_hardness_hv(0.8, case_steel("20MnCr5").composition, {});
  CHECK(std::fabs(hv - 766) < 1.0);
  CHECK(std::fabs(*hrc_from_hv(hv) - 62.8) < 0.1);
  // A quench that ends above Ms leaves austenite alone.
  CHECK(case_hardness_hv(0.8, {}, {99, 260.0, std::nullopt}) == austenite_hardness_hv);
}

TEST_CASE("Hollomon-Jaffe parameter, T (20 + log t), as taught (Trans. AIME 162 (1945) 223)") {
  CHECK(std::fabs(hollomon_jaffe_parameter({150, 2}) - 8590) < 1);
  CHECK(std::fabs(hollomon_jaffe_parameter({180, 2}) - 9199) < 1);
  CHECK(std::fabs(hollomon_jaffe_parameter({200, 2}) - 9605) < 1);
}

TEST_CASE("tempering drop: common practice, no source; nothing outside 150-204 degC and 0.5-10 h") {
  const auto drop = [](double degc, double carbon) { return tempering_drop({degc, 2}, carbon).value(); };
  CHECK(drop(180, 0.35).hv == doctest::Approx(15));
  CHECK(drop(180, 0.35).sigma_hv == 10);
  // Surface: 20-50 HV (1-2 HRC) at 150-180 degC, 2-3 HRC at 200; around 0.3-0.4 wt% C 0.5-1.5 HRC at 180.
  for (double degc : {150.0, 165.0, 180.0}) {
    CHECK(drop(degc, 0.8).hv > 19.9);
    CHECK(drop(degc, 0.8).hv < 50.1);
  }
  const auto drop_hrc = [&](double degc, double carbon) {
    const double hv = martensite_hardness_hv(carbon, 99);
    return *hrc_from_hv(hv) - *hrc_from_hv(hv - drop(degc, carbon).hv);
  };
  CHECK(drop_hrc(200, 0.6) > 1.5);
  CHECK(drop_hrc(200, 0.8) > 2);
  CHECK(drop_hrc(200, 0.8) < 3);
  for (double carbon : {0.30, 0.35, 0.40}) {
    CHECK(drop_hrc(180, carbon) > 0.5);
    CHECK(drop_hrc(180, carbon) < 1.5);
  }
  CHECK(drop(180, 0.1).hv == 0);
  CHECK(drop(190, 0.8).hv > drop(180, 0.8).hv);
  CHECK(tempering_drop({180, 4}, 0.8)->hv > drop(180, 0.8).hv);
  CHECK(drop(200, 0.8).sigma_hv == doctest::Approx(2.0 / 3.0 * drop(200, 0.8).hv));
  for (const Tempering& outside :
       {Tempering{149, 2}, {205, 2}, {180, 0.4}, {180, 11}, {std::nan(""), 2}, {180, std::nan("")}}) {
    CHECK_FALSE(tempering_drop(outside, 0.8).has_value());
    HardnessTreatment treatment;
    treatment.tempering = outside;
    CHECK_THROWS_AS(case_hardness_hv(0.5, {}, treatment), std::invalid_argument);
  }
}

TEST_CASE("one HRC at 550 HV is about 0.017 wt% C and 0.04 mm of the base case (computed)") {
  const double one_hrc = *carbon_for_hardness_hrc(53.4, 99) - *carbon_for_hardness_hrc(52.4, 99);
  CHECK(std::fabs(one_hrc - 0.017) < 1.5e-3);
  HardnessTreatment tempered = martensite_alone;
  tempered.tempering = Tempering{};
  const Profile profile = carburized({0.2, 0, 0, 0, 0, 0}, 1.10, 0.80);
  const double lost = *depth_at_hardness_m(profile, 550, {}, martensite_alone) -
                      *depth_at_hardness_m(profile, 550, {}, tempered);
  CHECK(std::fabs(1e3 * lost - 0.04) < 0.01);
}

TEST_CASE("the carbon limit of a hardness criterion and the hardness profile give one depth") {
  for (const Steel& steel : case_steels()) {
    CAPTURE(steel.name);
    const Composition& c = steel.composition;
    const Profile profile = carburized(c, 1.05, 0.80);
    for (double limit_hv : {513.0, 550.0, 600.0})
      for (double share : {90.0, 95.0, 99.0}) {
        CAPTURE(limit_hv);
        CAPTURE(share);
        // Without retained austenite: the table's own carbon, read the other way round.
        const HardnessTreatment table{share, std::nullopt, std::nullopt};
        const auto carbon = carbon_for_hardness_hrc(*hrc_from_hv(limit_hv), share);
        REQUIRE(carbon.has_value());
        CHECK(std::fabs(*carbon_for_hardness_hv(limit_hv, c, table) - *carbon) < 1e-9);
        CHECK(std::fabs(*depth_at_hardness_m(profile, limit_hv, c, table) -
                        *depth_at_carbon_m(profile, *carbon)) < 1e-9);
        // With retained austenite and a temper: its own carbon, the same depth.
        const HardnessTreatment full{share, 60.0, Tempering{180, 2}};
        const auto mixed = carbon_for_hardness_hv(limit_hv, c, full);
        if (!mixed) continue;
        CHECK(*mixed > *carbon);
        CHECK(case_hardness_hv(*mixed, c, full) == doctest::Approx(limit_hv).epsilon(1e-9));
        CHECK(std::fabs(*depth_at_hardness_m(profile, limit_hv, c, full) -
                        *depth_at_carbon_m(profile, *mixed)) < 1e-9);
      }
    // Frozen to -196 degC little austenite is left: within 10 um of the table alone, and nearer than at 20
    // degC.
    const double alone = *depth_at_hardness_m(profile, 550, c, martensite_alone);
    const double frozen = *depth_at_hardness_m(profile, 550, c, {99, -196.0, std::nullopt});
    CHECK(alone - frozen < 10e-6);
    CHECK(alone - frozen < alone - *depth_at_hardness_m(profile, 550, c, {}));
  }
}

TEST_CASE("a traverse by hand: ISO 18203's interpolation between two indents, and SAE J423's 50 HRC") {
  // CHD = d1 + (d2 - d1)(H1 - 550)/(H1 - H2), d2 - d1 <= 0.3 mm (from memory).
  const Profile profile = carburized({0.2, 0, 0, 0, 0, 0}, 1.10, 0.80);
  const auto hv = [&](double depth) { return hardness_at_depth_hv(profile, depth, {}, martensite_alone); };
  const double read = *depth_at_hardness_m(profile, 550, {}, martensite_alone);
  for (double apart_m : {0.1e-3, 0.3e-3})
    for (double share : {0.2, 0.5, 0.8}) {
      const double d1 = read - share * apart_m, d2 = d1 + apart_m;
      const double interpolated = d1 + (d2 - d1) * (hv(d1) - 550) / (hv(d1) - hv(d2));
      CHECK(std::fabs(interpolated - read) < (apart_m < 0.2e-3 ? 4e-6 : 25e-6));
    }
  // Hardness falls by 366 HV/mm there in the base case (computed): 16 HV are 0.044 mm. Within 5 %: both
  // tables are bent at their points.
  CHECK(std::fabs((hv(read - 50e-6) - hv(read + 50e-6)) / 0.1 / 366 - 1) < 0.05);
  // 50 HRC is 513 HV: a deeper case than CHD 550 HV.
  CHECK(*depth_at_hardness_m(profile, *hv_from_hrc(50), {}, martensite_alone) > read + 50e-6);
}

TEST_CASE("a surface made soft by retained austenite does not end the case") {
  const Composition steel = case_steel("9310").composition;
  const Profile profile = carburized(steel, 1.20, 1.20);  // 1.1 wt% C and more at the surface
  const HardnessTreatment warm_oil{99, 80.0, std::nullopt};
  const auto hv = hardness_profile_hv(profile, steel, warm_oil);
  const auto austenite = retained_austenite_profile(profile, steel, 80);
  REQUIRE(hv.size() == profile.depth_m.size());
  CHECK(hv.front() < 550);
  CHECK(austenite.front() > 0.5);
  for (std::size_t i = 1; i < austenite.size(); ++i) CHECK(austenite[i] < austenite[i - 1] + 1e-6);
  CHECK(*std::max_element(hv.begin(), hv.end()) > 600);
  const double depth = *depth_at_hardness_m(profile, 550, steel, warm_oil);
  CHECK(hardness_at_depth_hv(profile, depth, steel, warm_oil) == doctest::Approx(550).epsilon(1e-6));
  CHECK(hardness_at_depth_hv(profile, depth - 20e-6, steel, warm_oil) > 550);
  CHECK(hardness_at_depth_hv(profile, depth + 20e-6, steel, warm_oil) < 550);
  for (std::size_t i = 0; i < hv.size(); ++i)
    if (profile.depth_m[i] > depth) CHECK(hv[i] < 550);
}

TEST_CASE("depth at a hardness: no case is 0, a core at the limit has no depth") {
  Profile profile;
  for (int i = 0; i < 20; ++i) {
    profile.depth_m.push_back(1e-4 * i);
    profile.carbon_wt_pct.push_back(0.2 + 0.1 * std::exp(-0.3 * i));
  }
  CHECK(*depth_at_hardness_m(profile, 550, {}, {}) == 0.0);
  CHECK_FALSE(depth_at_hardness_m(profile, 400, {}, {}).has_value());
  CHECK_FALSE(carbon_for_hardness_hv(300, {}, {}).has_value());  // 0.10 wt% is harder already
  CHECK_FALSE(carbon_for_hardness_hv(900, {}, {}).has_value());
}

TEST_CASE("grinding takes its stock off the case, never below nothing") {
  CHECK(finished_case_depth_m(1.0e-3, 0.15e-3) == doctest::Approx(0.85e-3).epsilon(1e-12));
  CHECK(finished_case_depth_m(1.0e-3, 0) == 1.0e-3);
  CHECK(finished_case_depth_m(0.1e-3, 0.15e-3) == 0.0);
}

TEST_CASE("carbon at a depth: the nodes themselves, smooth between, the end beyond") {
  Profile profile;
  const auto carbon = [](double x) { return 0.2 + 0.8 * std::exp(-x * x * 1e6); };
  profile.depth_m = make_mesh({Shape::plate, 10e-3, 0}).depth_m;
  for (double x : profile.depth_m) profile.carbon_wt_pct.push_back(carbon(x));
  for (std::size_t i = 0; i < profile.depth_m.size(); ++i)
    CHECK(carbon_at_depth_wt_pct(profile, profile.depth_m[i]) == profile.carbon_wt_pct[i]);
  // The bulk of the mesh ends at 1.2 mm; beyond, spacings grow.
  for (double x = 0; x < 3e-3; x += 37e-6)
    CHECK(std::fabs(carbon_at_depth_wt_pct(profile, x) - carbon(x)) < (x < 1.1e-3 ? 2e-5 : 1.5e-4));
  CHECK(carbon_at_depth_wt_pct(profile, 10e-3) == profile.carbon_wt_pct.back());
  CHECK(carbon_at_depth_wt_pct(profile, -1) == profile.carbon_wt_pct.front());
}
