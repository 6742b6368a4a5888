#include "core/model/smearing.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

Transform Spec(const std::string& spec) { return *Transform::ReadSpec(spec).value().transform; }

// smearing.py: the average over all residuals, in 50 digits.
struct Case {
  std::string name;
  Transform response;
  std::vector<double> residuals, weights, fits, means, medians;
};
std::vector<Case> Cases(const std::string& group) {
  static const nlohmann::json file = ReadJson("smearing.json");
  std::vector<Case> cases;
  for (const auto& c : file[group]) {
    Case out{c["spec"].get<std::string>() + " on " + c["residuals"].get<std::string>() +
                 (c["weights"].empty() ? "" : " weighted"),
             Spec(c["spec"]),
             file["sets"][c["residuals"].get<std::string>()],
             c["weights"],
             c["fits"],
             c["means"],
             c["medians"]};
    for (double& e : out.residuals) e *= c["spread"].get<double>();
    cases.push_back(std::move(out));
  }
  return cases;
}

TEST(Smearing, ExactKindsAverageOverEveryRow) {
  for (const Case& c : Cases("exact")) {
    const Smearing smearing = MakeSmearing(c.response, c.residuals, c.weights);
    EXPECT_EQ(smearing.kind, SmearingKindOf(c.response)) << c.name;
    EXPECT_NE(smearing.kind, Smearing::Kind::kPoints) << c.name;
    EXPECT_EQ(smearing.values.size(), SmearingValueCount(c.response)) << c.name;
    for (size_t i = 0; i < c.fits.size(); ++i) {
      const double mean = SmearedMean(smearing, c.response, c.fits[i]);
      // Digits of the larger of mean and median: near 0 a mean is a difference of the two.
      const double unit = std::max(std::abs(c.means[i]), std::abs(c.medians[i]));
      EXPECT_LE(std::abs(mean - c.means[i]), 2e-14 * unit)
          << c.name << " at " << c.fits[i] << ": " << mean << " for " << c.means[i];
    }
  }
}

TEST(Smearing, PointsAreExactUpToFiftyRowsAndCloseBeyond) {
  for (const Case& c : Cases("points")) {
    const Smearing smearing = MakeSmearing(c.response, c.residuals, c.weights);
    EXPECT_LE(smearing.points.size(), 100U) << c.name;
    for (size_t i = 0; i < c.fits.size(); ++i) {
      const double mean = SmearedMean(smearing, c.response, c.fits[i]);
      if (c.residuals.size() <= 50) {
        EXPECT_TRUE(Agrees(c.means[i], mean, 13.5)) << c.name << " at " << c.fits[i];
      } else {
        // Most is missed where the edge of the domain cuts through a group.
        const double correction = std::abs(c.means[i] - c.medians[i]);
        const bool at_edge = c.response.kind() == TransformKind::kSqrtOffset;
        EXPECT_LE(std::abs(mean - c.means[i]),
                  (at_edge ? 1e-3 : 1.5e-4) * correction + 1e-14 * std::abs(c.means[i]))
            << c.name << " at " << c.fits[i] << ": " << (mean - c.means[i]) / correction;
      }
    }
  }
}

// Of every pair of coarse points, and so of all of them, weight and moments up to the third are
// those of the residuals.
TEST(Smearing, CoarsePointsStandForSeveralRowsAndKeepTheirMoments) {
  for (const Case& c : Cases("points")) {
    const Smearing smearing = MakeSmearing(c.response, c.residuals, c.weights);
    const auto rows = static_cast<std::int64_t>(c.residuals.size());
    const Smearing coarse = CoarseSmearing(smearing, rows, 5);
    const auto moments = [](const std::vector<double>& points) {
      std::array<double, 4> sums = {};
      for (size_t i = 0; i < points.size(); i += 2)
        for (size_t k = 0; k < 4; ++k)
          sums[k] += points[i + 1] * std::pow(points[i], static_cast<double>(k));
      return sums;
    };
    const auto expected = moments(smearing.points), got = moments(coarse.points);
    for (size_t k = 0; k < 4; ++k)
      EXPECT_NEAR(got[k], expected[k], 1e-9 * (1 + std::abs(expected[k])));
    EXPECT_LE(coarse.points.size() / 2,
              2 * static_cast<size_t>(std::max<std::int64_t>(rows / 10, 1)));
    if (smearing.kind == Smearing::Kind::kMoments) {
      EXPECT_TRUE(std::isnan(coarse.values[0]));
    }
    for (size_t i = 0; i < c.fits.size(); ++i) {
      const double mean = SmearedMean(coarse, c.response, c.fits[i]);
      const double correction = std::abs(c.means[i] - c.medians[i]);
      EXPECT_LE(std::abs(mean - c.means[i]), 0.1 * correction + 1e-12 * std::abs(c.means[i]))
          << c.name << " at " << c.fits[i];
    }
  }
}

TEST(Smearing, LinearResponsesAreTheFitItself) {
  const std::vector<double> residuals = {-1, 4};  // without an intercept they need not sum to 0
  for (const char* spec :
       {"identity", "z_score 3 2", "rescale 0 10 5 7", "center 4", "date_days", "yeo_johnson 1"}) {
    const Transform response = Spec(spec);
    const Smearing smearing = MakeSmearing(response, residuals);
    EXPECT_EQ(smearing.kind, Smearing::Kind::kNone) << spec;
    EXPECT_EQ(SmearedMean(smearing, response, 1.25), response.Back(1.25)) << spec;
  }
}

TEST(Smearing, APointAcrossZeroLeavesAReciprocalWithoutAMean) {
  const std::vector<double> residuals = {-0.2, 0, 0.2};
  const Transform response = Spec("reciprocal");
  const Smearing smearing = MakeSmearing(response, residuals);
  EXPECT_TRUE(std::isnan(SmearedMean(smearing, response, 0.1)));
  // (1/0.8 + 1/1 + 1/1.2) / 3
  EXPECT_TRUE(Agrees((1.25 + 1 + 1 / 1.2) / 3, SmearedMean(smearing, response, 1), 15));
}

TEST(Smearing, OneGroupOfTiesIsOnePoint) {
  const std::vector<double> residuals(1000, 0.5);
  const Transform response = Spec("box_cox 0.3");
  const Smearing smearing = MakeSmearing(response, residuals);
  EXPECT_TRUE(Agrees(response.Back(2.5), SmearedMean(smearing, response, 2), 15));
}

TEST(Smearing, PointsStayBetweenLeastAndLargestResidual) {
  std::vector<double> residuals(3000, 0);
  residuals.back() = 1;  // a group whose plain mean − sd would lie below its least
  const Smearing smearing = MakeSmearing(Spec("reciprocal"), residuals);
  for (size_t i = 0; i < smearing.points.size(); i += 2) {
    EXPECT_GE(smearing.points[i], 0);
    EXPECT_LE(smearing.points[i], 1);
    EXPECT_GT(smearing.points[i + 1], 0);
  }
}

TEST(Smearing, OverflowAndNoRowsGiveNoMean) {
  const Transform log = Spec("log_offset");
  EXPECT_TRUE(std::isnan(SmearedMean(MakeSmearing(log, std::vector<double>{800}), log, 0)));
  for (const char* spec : {"log_offset", "asinh_scaled 1", "sqrt_offset", "box_cox 0.3"})
    EXPECT_TRUE(std::isnan(SmearedMean(MakeSmearing(Spec(spec), {}), Spec(spec), 1))) << spec;
}

}  // namespace
}  // namespace ladderline::testing
