#include "core/model/fit.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <numbers>

#include "core/describe/quantiles.h"
#include "core/model/column_summary.h"
#include "core/model/design.h"
#include "core/model/estimated_transforms.h"
#include "core/model/fit_checks.h"
#include "core/model/fit_clusters.h"
#include "core/model/fit_figures.h"
#include "core/model/smearing.h"
#include "core/regression/cluster_covariance.h"
#include "core/support/prose.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

constexpr std::size_t kResidualBins = 10;

std::string InQuotes(const std::string& text) { return "'" + Excerpt(text, 60) + "'"; }

}  // namespace

std::string Shortage(const ColumnSet& set, const Model& model) {
  const RowCounts& rows = model.rows;
  if (rows.offered == 0) return "no rows";
  if (rows.fitted == 0) {
    std::string why = "no complete rows among " + Counted(rows.offered, "row") + " offered";
    for (const ModelColumn& column : model.columns) {
      if (column.missing > 0)
        why += "; " + column.name + " is missing in " + std::to_string(column.missing);
      if (column.outside > 0)
        why += "; " + column.name + " is outside its domain in " + std::to_string(column.outside);
    }
    return why;
  }
  for (std::size_t i = 0; i < set.size(); ++i) {
    const ModelColumn& column = model.columns[i];
    if (!column.reference_given || column.reference >= 0) continue;
    const std::string& reference = set.column(i).label.reference;
    const CategoryLevel* alike = LevelAlike(column, reference);
    return "no complete row has the reference level " + InQuotes(reference) + " of " + column.name +
           (alike == nullptr ? "" : "; there is " + InQuotes(alike->text));
  }
  const std::int64_t count = CountTerms(model.columns, model.intercept);
  if (count > static_cast<std::int64_t>(kMostTerms)) {
    return "has " + std::to_string(count) + " terms; a model takes at most " +
           std::to_string(kMostTerms);
  }
  const auto terms = static_cast<std::int64_t>(model.terms.size());
  if (rows.fitted < terms)
    return "needs " + Counted(terms, "row") + ", has " + std::to_string(rows.fitted);
  return "";
}

namespace {

bool AllFinite(std::span<const double> numbers) {
  return std::all_of(numbers.begin(), numbers.end(), [](double x) { return std::isfinite(x); });
}

// Whether all that predictions are computed from stayed within the range of a double.
bool InRange(const Model& model) {
  const CentredBasis& basis = model.basis.fit;
  for (const DoubleDouble& b : basis.coefficient) {
    if (!std::isfinite(b.value())) return false;
  }
  for (Index j = 0; j < basis.rank(); ++j) {
    const double diagonal = basis.factor[static_cast<size_t>(PackedIndex(j, j))].value();
    if (!(diagonal > 0 && std::isfinite(diagonal))) return false;
  }
  for (const DoubleDouble& r : basis.factor) {
    if (!std::isfinite(r.value())) return false;
  }
  for (const Index kept : basis.kept) {
    const ModelTerm& term = model.terms[static_cast<size_t>(kept)];
    if (!std::isfinite(term.coefficient)) return false;
    // A high power of a huge number has a coefficient too small for a double.
    if (model.facts.residual_sd > 0 && HasPower(term, model.columns) &&
        term.standard_error[0] < std::numeric_limits<double>::min())
      return false;
  }
  for (const ResidualBin& bin : model.residuals.bins) {
    if (!std::isfinite(bin.fitted_low) || !std::isfinite(bin.fitted_high)) return false;
  }
  return AllFinite(basis.centre) && AllFinite(model.residuals.quantiles) &&
         (!model.basis.robust || AllFinite(model.basis.robust->matrix));
}

Model Refused(const Model& fitted, std::string reason) {
  Model model = fitted.Unfitted();
  model.reason = std::move(reason);
  return model;
}

void NoteRepeatedKeys(const ColumnSet& set, std::vector<ModelColumn>& columns) {
  const std::int64_t repeated = set.RepeatedKeys();
  if (repeated == 0) return;
  for (ModelColumn& column : columns) {
    if (column.role != ColumnRole::kKey) continue;
    column.note = std::to_string(repeated) + (repeated == 1 ? " value occurs" : " values occur") +
                  " more than once";
  }
}

// Without an intercept the first category gets all its indicators.
void ChooseReferences(const FitOptions& options, std::vector<ModelColumn>& columns) {
  if (options.intercept) return;
  for (ModelColumn& column : columns) {
    if (column.role == ColumnRole::kPredictor && column.kind == ColumnKind::kCategory) {
      column.reference = -1;
      column.reference_given = false;
      return;
    }
  }
}

std::string RepeatNote(const DroppedColumn& dropped, const Model& model) {
  std::string names;
  const ModelTerm& self = model.terms[static_cast<size_t>(dropped.column)];
  const bool higher_power = self.factors.size() == 1 && self.factors[0].power > 1;
  for (const Repeat& repeat : dropped.repeats) {
    const ModelTerm& term = model.terms[static_cast<size_t>(repeat.column)];
    // Lower powers have shares in the column that the fit works in, not always in the raw power.
    if (higher_power &&
        (term.factors.empty() || ColumnOf(term, model.columns) == self.factors[0].column))
      continue;
    if (term.factors.empty() && dropped.repeats.size() > 1) continue;
    names += (names.empty() ? "" : ", ") + term.name;
  }
  if (names.empty() && higher_power) {
    return "left out: repeats the lower powers of " +
           model.columns[static_cast<size_t>(self.factors[0].column)].name;
  }
  if (names.empty()) return "left out: always 0";
  if (names == "intercept") return "left out: always the same value";
  return "left out: repeats " + names;
}

// The powers of a polynomial ask for every digit of its basis, which the predicted error does not
// know of.
Extended ExtendedFor(const Model& model) {
  constexpr double kBearable = 2e6;  // rows · rank²: some ten milliseconds
  const auto terms = static_cast<double>(model.terms.size());
  const bool polynomial =
      std::any_of(model.columns.begin(), model.columns.end(),
                  [](const auto& c) { return c.kind == ColumnKind::kPolynomial; });
  return polynomial && static_cast<double>(model.rows.fitted) * terms * terms <= kBearable
             ? Extended::kAlways
             : Extended::kMeasured;
}

// The power of two by which the fit divides the response, as its exponent. Sums of fourth powers of
// residuals stay in range up to the limit; within it nothing is scaled, and nothing need be.
int ResponseExponent(const ModelColumn& response, std::span<const double> z) {
  constexpr int kHarmless = 100;
  double largest = 0;
  for (const double value : z) largest = std::max(largest, std::abs(value));
  if (z.empty())
    largest = std::max(std::abs(response.observed_low), std::abs(response.observed_high));
  if (largest == 0) return 0;
  const int exponent = std::ilogb(largest);
  return std::abs(exponent) <= kHarmless ? 0 : exponent;
}

// From a model of the response divided by 2^exponent to one of the response itself. What is a ratio
// stays bit for bit; residuals, smearing and errors in original units are not here yet.
void ScaleBack(int exponent, Model& model) {
  if (exponent == 0) return;
  const auto scale = [](int power, auto&... numbers) {
    ((numbers = std::ldexp(numbers, power)), ...);
  };
  for (ModelTerm& term : model.terms) {
    scale(exponent, term.coefficient);
    for (double& error : term.standard_error) scale(exponent, error);
  }
  for (ColumnTest& test : model.tests) scale(2 * exponent, test.sum_of_squares);
  for (DoubleDouble& beta : model.basis.fit.coefficient) scale(exponent, beta.hi, beta.lo);
  if (model.basis.robust) model.basis.robust->exponent = exponent;
  ModelFacts& facts = model.facts;
  scale(exponent, facts.residual_sd);
  scale(2 * exponent, facts.press);
  const double log_factor = static_cast<double>(model.rows.fitted) * exponent * std::numbers::ln2;
  for (double* log_likelihood : {&facts.log_likelihood, &facts.log_likelihood_original})
    *log_likelihood -= log_factor;
  for (double* criterion : {&facts.aic, &facts.bic, &facts.aic_original, &facts.bic_original})
    *criterion += 2 * log_factor;
}

// `cluster` is null without a cluster column.
void SetTerms(const LeastSquares& fit, const RawColumns& raw, const ResidualSummary& pass,
              const TermGroups& groups, const Covariance* cluster, Model& model) {
  const std::vector<double> coefficients = RawCoefficients(fit.basis, raw);
  for (size_t j = 0; j < model.terms.size(); ++j) model.terms[j].coefficient = coefficients[j];
  for (size_t kind = 0; kind < kErrorKinds; ++kind) {
    const bool of_clusters = static_cast<ErrorKind>(kind) == ErrorKind::kCluster;
    if (of_clusters && cluster == nullptr) continue;
    const Covariance covariance =
        of_clusters ? *cluster : CovarianceOf(static_cast<ErrorKind>(kind), fit, pass);
    const std::vector<double> errors = StandardErrors(fit.basis, covariance, raw);
    for (size_t j = 0; j < model.terms.size(); ++j) {
      ModelTerm& term = model.terms[j];
      term.standard_error[kind] = errors[j];
      const bool robust = static_cast<ErrorKind>(kind) != ErrorKind::kClassical;
      if (robust && std::isnan(errors[j]) && !std::isnan(term.standard_error[0]) &&
          !std::isnan(covariance.scale))
        term.note = "decided by one row alone: no robust errors";
    }
    if (static_cast<ErrorKind>(kind) == model.errors && model.errors != ErrorKind::kClassical)
      model.basis.robust = covariance;
  }
  SetInflation(fit.basis, raw, groups, model);
  for (const DroppedColumn& dropped : fit.dropped) {
    ModelTerm& term = model.terms[static_cast<size_t>(dropped.column)];
    term.note = RepeatNote(dropped, model);
    term.repeats = dropped.repeats;
    term.variance_inflation = kNaN;
  }
}

// ln |dz/dy| summed over the rows: what takes a log-likelihood to the original scale.
double LogJacobianSum(const Blocked<double>& y, std::span<const double> z,
                      const Transform& transform) {
  if (z.empty()) return 0;
  DoubleDouble sum;
  std::size_t i = 0;
  ForEachRun(y, [&](std::span<const double> run) {
    double part = 0;
    for (const double value : run) part += transform.LogJacobian(value, z[i++]);
    sum += part;
  });
  return sum.value();
}

// An estimate beside which a straight line is no substitute: not a mean, a spread or a range.
bool ChangesShape(std::optional<TransformKind> estimated) {
  return estimated == TransformKind::kLogOffset || estimated == TransformKind::kBoxCox ||
         estimated == TransformKind::kYeoJohnson;
}

void SetFacts(const ColumnSet& set, const DesignSource& source, const LeastSquares& fit,
              const ResidualSummary& pass, Model& model) {
  SetScaleFacts(fit, model);
  ModelFacts& out = model.facts;
  const double jacobian =
      LogJacobianSum(set.column(0).numbers, source.response(), model.response().transform);
  if (std::isfinite(jacobian)) {
    out.log_likelihood_original = out.log_likelihood + jacobian;
    // A power or offset that was looked for in the data counts as one parameter more, as in a scan.
    const bool estimated = ChangesShape(set.column(0).label.estimated);
    out.aic_original = out.aic - 2 * jacobian + (estimated ? 2 : 0);
    out.bic_original =
        out.bic - 2 * jacobian + (estimated ? std::log(static_cast<double>(model.rows.fitted)) : 0);
  }
  out.press = pass.press;
  model.basis.largest_leverage = pass.max_unit_leverage;
}

void SetInfluence(const ColumnSet& set, const ResidualSummary& pass, Model& model) {
  for (const InfluentialRow& row : pass.influential) {
    const auto i = static_cast<size_t>(row.row);
    KeyValue key = set.keys() == nullptr ? KeyValue(set.OfferedNumber(i)) : set.keys()->At(i);
    model.influence.push_back({.key = std::move(key),
                               .cooks_distance = row.cooks_distance,
                               .leverage = row.leverage,
                               .studentized_residual = row.studentized_residual});
  }
}

// The residuals of all kept rows, and what they are needed for: first as rows scaled by √w, then on
// the transformed scale itself, then as errors in original units. One number per row.
class ResidualWork {
 public:
  // `unit`: what one unit of the residuals to keep is on the transformed scale, a power of two.
  ResidualWork(const ColumnSet& set, const DesignSource& source, double unit)
      : set_(set),
        source_(source),
        unit_(unit),
        block_(static_cast<Index>(source.columns().size())) {
    residuals_.resize(static_cast<size_t>(source.rows()));
  }

  void Keep(const ResidualBlock& block) {
    std::copy_n(block.residual, block.rows, residuals_.begin() + block.first_row);
  }

  // As they were kept, of rows scaled by √w; until Summarise.
  std::span<const double> kept() const { return residuals_; }

  void Summarise(Model& model) {
    if (unit_ != 1)
      for (double& residual : residuals_) residual *= unit_;
    model.residuals.quantiles = Quantiles(SpanColumn(residuals_), kResidualProbabilities);
    SetBins(model);
    Unscale();
    const Transform& transform = model.response().transform;
    model.smearing = MakeSmearing(transform, residuals_, Weights());
    ToOriginalErrors(model.response());
    constexpr std::array<double, 1> kHalf = {0.5};
    model.facts.median_absolute_error = Quantiles(SpanColumn(residuals_), kHalf)[0];
  }

 private:
  // Calls f(i, z_i, w_i) for every row: the response as fitted, and its weight (1 without).
  template <class F>
  void ForEachRow(F f) {
    size_t i = 0;
    for (Index b = 0; b < source_.block_count(); ++b) {
      source_.FillResponse(b, block_);
      for (Index r = 0; r < block_.rows; ++r, ++i)
        f(i, block_.y[r], block_.w == nullptr ? 1.0 : block_.w[r]);
    }
  }

  double Fitted(size_t i, double z, double w) const {
    return z - (w == 1 ? residuals_[i] : residuals_[i] / std::sqrt(w));
  }

  void SetBins(Model& model) {
    double low = std::numeric_limits<double>::infinity(), high = -low;
    ForEachRow([&](size_t i, double z, double w) {
      const double fitted = Fitted(i, z, w);
      low = std::min(low, fitted);
      high = std::max(high, fitted);
    });
    const double width = (high - low) / kResidualBins;
    // A constant fit, or one whose range overflows, is one bin.
    const std::size_t bins = width > 0 && std::isfinite(width) ? kResidualBins : 1;
    const auto bin_of = [&](size_t i, double z, double w) {
      const double place = (Fitted(i, z, w) - low) / width;
      return bins > 1 && place >= 0 ? std::min(static_cast<std::size_t>(place), bins - 1) : 0;
    };
    // Running means and sums of squares about them: Welford, Technometrics 4 (1962). Measured from
    // the first residual, and in units, so that the squares stay in range.
    struct Sums {
      std::int64_t rows = 0;
      double origin = 0, mean = 0, squares = 0;
    };
    std::array<Sums, kResidualBins> sums;
    ForEachRow([&](size_t i, double z, double w) {
      Sums& bin = sums[bin_of(i, z, w)];
      if (bin.rows == 0) bin.origin = residuals_[i];
      const double e = (residuals_[i] - bin.origin) / unit_, d = e - bin.mean;
      bin.mean += d / static_cast<double>(++bin.rows);
      bin.squares += d * (e - bin.mean);
    });
    for (std::size_t b = 0; b < bins; ++b) {
      ResidualBin bin;
      bin.fitted_low = low + static_cast<double>(b) * width;
      bin.fitted_high = b + 1 == bins ? high : low + static_cast<double>(b + 1) * width;
      bin.rows = sums[b].rows;
      if (bin.rows > 0) bin.mean = sums[b].origin + unit_ * sums[b].mean;
      if (bin.rows > 1)
        bin.sd = unit_ * std::sqrt(sums[b].squares / static_cast<double>(bin.rows - 1));
      model.residuals.bins.push_back(bin);
    }
  }

  void Unscale() {
    if (!source_.has_weights()) return;
    ForEachRow([&](size_t i, double, double w) { residuals_[i] /= std::sqrt(w); });
  }

  std::vector<double> Weights() {
    std::vector<double> weights;
    if (source_.has_weights()) {
      weights.resize(residuals_.size());
      ForEachRow([&](size_t i, double, double w) { weights[i] = w; });
    }
    return weights;
  }

  void ToOriginalErrors(const ModelColumn& response) {
    const Transform& transform = response.transform;
    const Blocked<double>& y = set_.column(0).numbers;
    std::array<double, kBlockRows> fitted;
    size_t first = 0;
    for (Index b = 0; b < source_.block_count(); ++b) {
      source_.FillResponse(b, block_);
      const auto n = static_cast<size_t>(block_.rows);
      for (size_t r = 0; r < n; ++r) fitted[r] = block_.y[r] - residuals_[first + r];
      std::array<double, kBlockRows> scratch;
      const double* raw = Gather(y, first, n, scratch.data());
      std::array<double, kBlockRows> back;
      transform.BackBlock(fitted.data(), back.data(), n);
      for (size_t r = 0; r < n; ++r) {
        // Outside the domain of the way back the value is held at the edge, as predictions are.
        const double value = std::isnan(back[r]) || transform.HoldsMore()
                                 ? response.BackHeld(fitted[r], fitted[r])
                                 : back[r];
        const double error = std::abs(raw[r] - value);
        residuals_[first + r] = std::isnan(error) ? std::numeric_limits<double>::infinity() : error;
      }
      first += n;
    }
  }

  const ColumnSet& set_;
  const DesignSource& source_;
  double unit_;
  RowBlock block_;
  std::vector<double> residuals_;
};

}  // namespace

Result<Model> FitOls(const ColumnSet& set, const FitOptions& options) {
  Model model;
  model.name = options.name;
  model.intercept = options.intercept;
  if (options.errors == ErrorKind::kCluster && set.cluster_column() < 0) {
    return Error{
        "option errors is cluster, but no label says which column has the clusters; "
        "write 'district | cluster' for a column like district"};
  }
  model.errors = options.errors.value_or(set.cluster_column() < 0 ? ErrorKind::kClassical
                                                                  : ErrorKind::kCluster);
  model.level = options.level;
  model.checks_wanted = options.checks;
  model.rows = set.rows();
  for (size_t i = 0; i < set.size(); ++i) model.columns.push_back(Summarise(set, i));
  ChooseReferences(options, model.columns);
  model.terms = MakeTerms(model.columns, options.intercept);
  const bool may_have_terms =
      options.intercept ||
      std::any_of(model.columns.begin(), model.columns.end(),
                  [](const auto& column) { return column.role == ColumnRole::kPredictor; });
  if (!may_have_terms) return Error{"needs a predictor or an intercept"};
  const std::optional<TransformKind> estimated = set.column(0).label.estimated;
  if (!options.intercept &&
      (estimated == TransformKind::kBoxCox || estimated == TransformKind::kYeoJohnson)) {
    return Error{"option intercept must be 'fitted', got 'none', where the power of " +
                 model.response().name +
                 " is estimated; without an intercept it would depend on the unit"};
  }
  model.reason = set.refusal().empty() ? Shortage(set, model) : set.refusal();
  if (model.refused()) return Refused(model, model.reason);
  std::optional<Error> error = EstimatePredictors(set, model.columns);
  if (!error) error = EstimateResponse(set, model.terms, model.columns);
  if (error) return Refused(model, error->what);
  model.digest = set.Digest();
  NoteRepeatedKeys(set, model.columns);

  DesignSource source(set, model.columns, model.terms);
  const int exponent = ResponseExponent(model.response(), source.response());
  source.DivideResponse(exponent);
  const LeastSquares fit = FitLeastSquares(source, ExtendedFor(model));
  model.basis.fit = fit.basis;
  ResidualWork work(set, source, std::ldexp(1.0, exponent));
  ResidualOptions pass_options;
  std::optional<FitChecks> checks;
  if (options.checks) checks.emplace(set);
  pass_options.visit = [&](const ResidualBlock& block) {
    work.Keep(block);
    if (checks) checks->See(block);
  };
  const ResidualSummary pass = PassResiduals(source, fit, pass_options);
  const RawColumns raw = MakeRawColumns(model.columns, model.terms, fit.dropped);
  if (checks) checks->Test(source, fit, raw, pass, work.kept());

  const NumberedClusters clusters = NumberClusters(set);
  std::optional<Covariance> cluster;
  if (clusters.count > 0) {
    cluster = ClusterCovariance(source, fit, pass, work.kept(), {clusters.of_row, clusters.count});
    model.clusters = clusters.count;
  }

  const TermGroups groups = GroupTerms(model);
  SetTerms(fit, raw, pass, groups, cluster ? &*cluster : nullptr, model);
  NoteLevelsOfOneCluster(set, clusters, model);
  SetTests(fit, groups, model);
  SetFacts(set, source, fit, pass, model);
  SetInfluence(set, pass, model);
  ScaleBack(exponent, model);
  work.Summarise(model);
  if (!AllFinite(model.smearing.points)) model.smearing.points.clear();
  if (!InRange(model)) return Refused(model, "numbers too large or too small to fit; rescale them");
  if (checks) {
    model.response_histogram = CountResponse(set.column(0).numbers, source.response());
    model.checks = checks->Findings(model);
  }
  return model;
}

}  // namespace ladderline
