// How often 95% limits hold the truth, on data drawn over and over where errors are not what the
// classical limits take them for. Fixed seeds: the same figures on every machine.
//
//   funnel    100 rows, residuals up to ten times as wide at one end as at the other
//   clusters  40 clusters of 5 to 25 rows, which share a predictor and a part of the error
//
// HC3 and cluster limits should hold in 93% to 97% of the draws, classical ones in fewer.
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <string>
#include <vector>

#include "core/model/fit.h"
#include "core/model/model_errors.h"
#include "core/model/predict.h"
#include "core/support/distributions.h"

namespace ladderline {
namespace {

constexpr int kDraws = 10'000;
constexpr double kLevel = 0.95;

// SplitMix64 (Steele, Lea & Flood 2014), and normal numbers by Box & Muller (1958).
class Chance {
 public:
  explicit Chance(std::uint64_t seed) : state_(seed) {}
  double Uniform() {
    std::uint64_t z = state_ += 0x9e3779b97f4a7c15u;
    z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9u;
    z = (z ^ (z >> 27)) * 0x94d049bb133111ebu;
    return (static_cast<double>((z ^ (z >> 31)) >> 11) + 0.5) * 0x1p-53;
  }
  double Normal() {
    const double radius = std::sqrt(-2 * std::log(Uniform()));
    return radius * std::cos(6.283185307179586 * Uniform());
  }

 private:
  std::uint64_t state_;
};

Cell Number(double x) { return {.kind = Cell::Kind::kNumber, .number = x}; }
Cell Integer(std::int64_t i) { return {.kind = Cell::Kind::kInteger, .integer = i}; }

ColumnSet Columns(std::vector<std::string> labels) {
  std::vector<Label> read;
  for (const std::string& label : labels) read.push_back(ReadLabel(label).value());
  return ColumnSet::Make(std::move(read)).value();
}

// Counts of limits that held.
struct Held {
  int slope = 0, fitted = 0;
};

void Count(const ColumnSet& set, ErrorKind errors, double slope, double x, double fitted,
           Held& held) {
  FitOptions options;
  options.errors = errors;
  options.checks = false;
  const Model model = FitOls(set, options).value();
  const ModelTerm& term = model.terms[1];
  const double reach = StudentTCritical(kLevel, ErrorDf(model, errors)) *
                       term.standard_error[static_cast<std::size_t>(errors)];
  held.slope += std::abs(term.coefficient - slope) <= reach;
  const Predictor predictor(model);
  PredictionRow row;
  const std::vector<Input> inputs = {{.kind = Input::Kind::kNumber, .number = x}};
  predictor.Resolve(inputs, row);
  const Interval limits = predictor.TypicalLimits(row, kLevel);
  held.fitted += limits.low <= fitted && fitted <= limits.high;
}

void Print(const char* what, ErrorKind errors, const Held& held) {
  const auto percent = [](int count) { return 100.0 * count / kDraws; };
  std::printf("%-9s %-10s %6.1f%% %6.1f%%\n", what,
              std::string(kErrorKindNames[static_cast<std::size_t>(errors)]).c_str(),
              percent(held.slope), percent(held.fitted));
}

void Funnel() {
  Chance chance(1);
  Held classical, robust;
  for (int draw = 0; draw < kDraws; ++draw) {
    ColumnSet set = Columns({"y", "x"});
    set.Decide(1, Wanted::kNumber, "");
    for (int i = 0; i < 100; ++i) {
      const double x = chance.Uniform();
      const std::vector<Cell> cells = {Number(1 + 2 * x + (0.2 + 1.8 * x * x) * chance.Normal()),
                                       Number(x)};
      (void)set.Add(cells);
    }
    Count(set, ErrorKind::kClassical, 2, 0.9, 2.8, classical);
    Count(set, ErrorKind::kHc3, 2, 0.9, 2.8, robust);
  }
  Print("funnel", ErrorKind::kClassical, classical);
  Print("funnel", ErrorKind::kHc3, robust);
}

void Clustered() {
  Chance chance(2);
  Held classical, robust, cluster;
  for (int draw = 0; draw < kDraws; ++draw) {
    ColumnSet set = Columns({"y", "x", "g | cluster"});
    set.Decide(1, Wanted::kNumber, "");
    for (int g = 0; g < 40; ++g) {
      const double x = chance.Normal(), shared = 0.7 * chance.Normal();
      const int rows = 5 + static_cast<int>(21 * chance.Uniform());
      for (int i = 0; i < rows; ++i) {
        const std::vector<Cell> cells = {Number(1 + 0.5 * x + shared + chance.Normal()), Number(x),
                                         Integer(g)};
        (void)set.Add(cells);
      }
    }
    Count(set, ErrorKind::kClassical, 0.5, 1, 1.5, classical);
    Count(set, ErrorKind::kHc3, 0.5, 1, 1.5, robust);
    Count(set, ErrorKind::kCluster, 0.5, 1, 1.5, cluster);
  }
  Print("clusters", ErrorKind::kClassical, classical);
  Print("clusters", ErrorKind::kHc3, robust);
  Print("clusters", ErrorKind::kCluster, cluster);
}

}  // namespace
}  // namespace ladderline

int main() {
  std::printf("%d draws, 95%% limits\n%-9s %-10s %7s %7s\n", ladderline::kDraws, "data", "errors",
              "slope", "fitted");
  ladderline::Funnel();
  ladderline::Clustered();
  return 0;
}
