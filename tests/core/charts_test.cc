// The three charts: what they hold, for figures of any kind. How they look is tested in a browser.
#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <regex>

#include "core/chart/histogram_chart.h"
#include "core/chart/intervals_chart.h"
#include "core/chart/points_chart.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::Not;

constexpr double kNone = std::numeric_limits<double>::quiet_NaN();

// The numbers of an attribute, in order.
std::vector<double> Values(const std::string& svg, const std::string& attribute) {
  std::vector<double> values;
  const std::regex pattern(" " + attribute + "=\"([^\"]*)\"");
  for (std::sregex_iterator match(svg.begin(), svg.end(), pattern), end; match != end; ++match)
    values.push_back(*ParseNumber((*match)[1].str()));
  return values;
}

std::string DescriptionOf(const std::string& svg) {
  const std::size_t from = svg.find('>', svg.find("<desc")) + 1;
  return svg.substr(from, svg.find("</desc>") - from);
}

// No coordinate is missing or beyond the picture, but for what an arrow or a dot needs.
void ExpectInside(const std::string& svg) {
  std::smatch box;
  ASSERT_TRUE(std::regex_search(svg, box, std::regex("viewBox=\"0 0 360 ([0-9.]+)\"")));
  const double height = *ParseNumber(box[1].str());
  for (const char* attribute : {"x", "x1", "x2", "cx"}) {
    for (const double x : Values(svg, attribute)) {
      EXPECT_GE(x, 0) << attribute;
      EXPECT_LE(x, 360) << attribute;
    }
  }
  for (const char* attribute : {"y", "y1", "y2", "cy"}) {
    for (const double y : Values(svg, attribute)) {
      EXPECT_GE(y, 0) << attribute;
      EXPECT_LE(y, height) << attribute;
    }
  }
  EXPECT_THAT(svg, Not(HasSubstr("nan")));
  EXPECT_THAT(svg, Not(HasSubstr("inf")));
}

std::string Bars(std::vector<ChartBin> bins, std::int64_t skipped = 0) {
  Result<std::string> svg = HistogramChart("Cost", "cost (EUR)", std::move(bins), skipped);
  EXPECT_TRUE(svg.ok());
  ExpectInside(svg.value());
  return std::move(svg).value();
}

std::string FaultOf(std::vector<ChartBin> bins) {
  const Result<std::string> svg = HistogramChart("Cost", "cost (EUR)", std::move(bins), 0);
  return svg.ok() ? "(none)" : svg.error();
}

TEST(HistogramChart, BarsKeepTheirFiguresAndStandInOrder) {
  const std::string svg = Bars({{0.1, 0.2, 30}, {0, 0.1, 10}, {0.2, 0.30000000000000004, 20}}, 2);
  EXPECT_THAT(Values(svg, "data-low"), ElementsAre(0, 0.1, 0.2));
  EXPECT_THAT(Values(svg, "data-high"), ElementsAre(0.1, 0.2, 0.30000000000000004));
  EXPECT_THAT(Values(svg, "data-rows"), ElementsAre(10, 30, 20));
  const std::vector<double> heights = Values(svg, "height");
  EXPECT_NEAR(heights[1] / heights[0], 3, 0.01);
  EXPECT_EQ(DescriptionOf(svg),
            "Histogram of cost (EUR): 60 rows in 3 bins from 0 to 0.3. The fullest bin, 0.1 to "
            "0.2, has 30; the middle row lies in 0.1 to 0.2. 2 rows with a missing value are left "
            "out.");
}

TEST(HistogramChart, UnequalBinsHaveTheAreaOfTheirRows) {
  const std::string svg = Bars({{0, 100, 50}, {100, 200, 40}, {200, 1000, 40}});
  const std::vector<double> heights = Values(svg, "height"), widths = Values(svg, "width");
  // But for the hair between bars.
  EXPECT_NEAR(heights[1] * (widths[1] + 1) / (heights[2] * (widths[2] + 1)), 1, 1e-3);
  EXPECT_THAT(svg, HasSubstr(">rows per 100<"));
  EXPECT_THAT(Bars({{0, 1, 1}, {5, 6, 1}}), HasSubstr(">rows<"));
}

TEST(HistogramChart, AnyBinsCanBeDrawn) {
  constexpr double kMost = std::numeric_limits<double>::max();
  Bars({{7, 7, 12}});
  Bars({{0, 1, 0}});
  Bars({{-kMost, 0, 3}, {0, kMost, 1}});
  Bars({{1e9, 1e9 + 1e-6, 3}, {1e9 + 1e-6, 1e9 + 2e-6, 1e300}});
  Bars({{0, std::numeric_limits<double>::denorm_min(), 0.25}});
  EXPECT_THAT(Values(Bars({{0, 1, 2}, {1, 2, 5}, {0, 1, 3}}), "data-rows"), ElementsAre(5, 5));
}

TEST(HistogramChart, FaultsAreNamed) {
  EXPECT_EQ(FaultOf({{3, 1, 5}}), "high must not be below low, got 3 to 1");
  EXPECT_EQ(FaultOf({{0, 0, 5}, {0, 1, 5}}), "high must lie above low, got 0 to 0");
  EXPECT_EQ(FaultOf({{0, 1, -1}}), "rows must not be negative, got -1");
  EXPECT_EQ(FaultOf({{0, 2, 1}, {1, 3, 1}}), "bins must not overlap, got 0 to 2 and 1 to 3");
  EXPECT_EQ(FaultOf({{0, 1, 1e308}, {1, 2, 1e308}}),
            "rows of all bins together must be a number, got an overflow");
  EXPECT_EQ(FaultOf({{0, 1, 1e308}, {0, 1, 1e308}}),
            "rows of all bins together must be a number, got an overflow");
  std::vector<ChartBin> many;
  for (int i = 0; i <= 1000; ++i) many.push_back({1.0 * i, i + 1.0, 1});
  EXPECT_EQ(FaultOf(many), "takes at most 1000 bins, got 1001");
}

std::string Points(std::vector<ChartPoint> points, std::int64_t skipped = 0) {
  const std::string svg = PointsChart("Cost & age", "age", "cost", std::move(points), skipped);
  ExpectInside(svg);
  return svg;
}

TEST(PointsChart, DotsKeepTheirFigures) {
  const std::string svg =
      Points({{2, 30, 25, 20, kNone}, {1, 10.125, 5, kNone, kNone}, {3, 20, 45, 15, 22}}, 1);
  EXPECT_THAT(Values(svg, "data-x"), ElementsAre(1, 2, 3));
  EXPECT_THAT(Values(svg, "data-y"), ElementsAre(10.125, 30, 20));
  EXPECT_THAT(Values(svg, "data-low"), ElementsAre(20, 15));
  EXPECT_THAT(Values(svg, "data-high"), ElementsAre(22));
  EXPECT_THAT(svg, HasSubstr("<polyline"));
  EXPECT_THAT(svg, HasSubstr("<title>3, 20, from 15, to 22</title>"));
  EXPECT_EQ(DescriptionOf(svg),
            "3 points: age from 1 to 3, cost from 10.1 to 30. At the left end cost is 10.1, at the "
            "right end 20. 1 row with a missing value is left out.");
}

TEST(PointsChart, OfManyPointsOneIsDrawnForEachPlace) {
  std::vector<ChartPoint> points;
  for (int i = 0; i < 10000; ++i) {
    points.push_back({std::fmod(i * 0.618034, 1), std::fmod(i * 0.414214, 1), kNone, kNone, kNone});
  }
  points.push_back({5, 5, kNone, kNone, kNone});  // far from all others
  const std::string svg = Points(points);
  const std::vector<double> x = Values(svg, "data-x");
  EXPECT_LE(x.size(), kMostDrawnPoints);
  EXPECT_GE(x.size(), kMostDrawnPoints / 3);
  EXPECT_EQ(x.back(), 5);
  EXPECT_THAT(DescriptionOf(svg), HasSubstr("10001 points: "));
  EXPECT_THAT(DescriptionOf(svg), HasSubstr(std::to_string(x.size()) + " are drawn"));
  EXPECT_LT(svg.size(), 150'000u);
  // Ten thousand times the same point.
  const std::vector<ChartPoint> same(10000, {1, 1, kNone, kNone, kNone});
  EXPECT_THAT(Values(Points(same), "data-x"), ElementsAre(1));
}

TEST(PointsChart, AnyPointsCanBeDrawn) {
  constexpr double kMost = std::numeric_limits<double>::max();
  Points({{5, 7, kNone, kNone, kNone}});
  Points({{-kMost, 1e-300, kNone, kNone, kNone}, {kMost, 2e-300, kNone, -kMost, kMost}});
  Points({{1e9, 1e9, 1e9, kNone, kNone}, {1e9 + 1e-6, 1e9 + 1e-6, 1e9, kNone, kNone}});
  Points({{0, -0.0, 0, 0, 0}, {0, 0, 0, 0, 0}});
}

std::string Intervals(const std::vector<ChartInterval>& intervals, std::int64_t skipped = 0) {
  Result<std::string> svg = IntervalsChart("Rates", "per 1,000", intervals, skipped);
  EXPECT_TRUE(svg.ok());
  ExpectInside(svg.value());
  return std::move(svg).value();
}

TEST(IntervalsChart, FiguresAreShownAndKept) {
  const std::string svg = Intervals({{"Northfold", 12.3456, 9.1, 16.789},
                                     {"Marrow Quay", -3, kNone, 1},
                                     {"Lower Eddle", 20, 15, kNone},
                                     {"Saltby", 7, kNone, kNone}},
                                    2);
  EXPECT_THAT(Values(svg, "data-middle"), ElementsAre(12.3456, -3, 20, 7));
  EXPECT_THAT(Values(svg, "data-low"), ElementsAre(9.1, 15));
  EXPECT_THAT(Values(svg, "data-high"), ElementsAre(16.789, 1));
  for (const char* shown : {">12.3 (9.1 to 16.8)<", ">-3 (to 1)<", ">20 (from 15)<", ">7<",
                            ">Northfold<", "<title>Northfold: 12.3456 (9.1 to 16.789)</title>"})
    EXPECT_THAT(svg, HasSubstr(shown));
  EXPECT_EQ(DescriptionOf(svg),
            "4 figures of per 1,000. Largest: Lower Eddle, 20 (from 15). Smallest: Marrow Quay, -3 "
            "(to 1). 2 rows with a missing value are left out.");
  // An arrow for each open side.
  EXPECT_THAT(svg, HasSubstr("<path "));
  EXPECT_EQ(svg.find("<path ", svg.find("<path ", svg.find("<path ") + 1) + 1), std::string::npos);
}

TEST(IntervalsChart, SaysOnWhichSideOfZeroLimitsLie) {
  EXPECT_THAT(DescriptionOf(
                  Intervals({{"a", 5, 1, 9}, {"b", -5, -9, -1}, {"c", 0, -1, 1}, {"d", 1, 0, 2}})),
              HasSubstr("Limits lie above 0 for 1, below 0 for 1, and hold 0 for 2."));
  EXPECT_EQ(DescriptionOf(Intervals({{"a", 5, 1, 9}})), "per 1,000: a, 5 (1 to 9).");
}

TEST(IntervalsChart, NamesOfAnyKindStayText) {
  const std::string script = "<script>alert('1')</script>\x01";
  const std::string svg =
      Intervals({{script, 1, 0, 2}, {std::string(2000, 'W'), 2, 1, 3}, {"", 3, 2, 4}});
  EXPECT_THAT(svg, Not(HasSubstr("<script")));
  EXPECT_THAT(svg, HasSubstr("&lt;script&gt;alert(&#39;1&#39;)"));
  EXPECT_THAT(svg, HasSubstr("<title>" + std::string(2000, 'W') + "</title>"));
}

TEST(IntervalsChart, TheFirstHundredAreDrawn) {
  std::vector<ChartInterval> many;
  for (int i = 0; i < 250; ++i)
    many.push_back({"area " + std::to_string(i), 1.0 * i, i - 1.0, i + 1.0});
  const std::string svg = Intervals(many);
  EXPECT_EQ(Values(svg, "data-middle").size(), 100u);
  EXPECT_THAT(svg, HasSubstr(">and 150 more<"));
  EXPECT_THAT(DescriptionOf(svg), HasSubstr("The first 100 are drawn."));
}

TEST(IntervalsChart, CrossedLimitsAreAFault) {
  const Result<std::string> svg = IntervalsChart("t", "a", {{"x", 1, 2, 0}}, 0);
  ASSERT_FALSE(svg.ok());
  EXPECT_EQ(svg.error(), "high must not be below low, got 2 to 0");
  Intervals({{"huge", 1e308, -1.7e308, 1.7e308}, {"tiny", 1e-320, 0, 2e-320}});
}

TEST(Charts, AreNamedByTitleAndDescriptionWithoutIds) {
  for (const std::string& svg :
       {Bars({{0, 1, 2}}), Points({{0, 1, kNone, kNone, kNone}}), Intervals({{"a", 0, -1, 1}})}) {
    const std::size_t title = svg.find("<title>") + 7;
    EXPECT_THAT(svg, HasSubstr("role=\"img\" aria-label=\"" +
                               svg.substr(title, svg.find("</title>") - title) + ". " +
                               DescriptionOf(svg) + "\""));
    EXPECT_THAT(svg, Not(HasSubstr(" id=")));
  }
}

}  // namespace
}  // namespace ladderline
