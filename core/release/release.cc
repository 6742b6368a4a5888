#include "core/release/release.h"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "core/elementary/elementary.h"
#include "core/model/design.h"
#include "core/model/fit_figures.h"
#include "core/regression/restricted_fit.h"
#include "core/release/coarse.h"
#include "core/release/merged_levels.h"
#include "core/release/released_checks.h"
#include "core/release/term_map.h"
#include "core/support/prose.h"

namespace ladderline {
namespace {

// Figures of one row that stay, in digits.
constexpr int kSingleDigits = 2, kMedianDigits = 3;

// The share of a sum, or of a fitted value, from which on a row decides it.
constexpr double kDominant = 0.5;

// Of what collinear columns repeat, as the fit has it: a generous bound.
constexpr double kRoundingOfRepeats = 1e-11;

constexpr std::string_view kEstimated = "estimated from the rows used";
constexpr std::string_view kByRange = "range observed in the rows used";
constexpr std::string_view kOneRow = "decided by one row alone";
constexpr std::string_view kAlwaysZero = "left out: always 0";
constexpr std::string_view kOneCluster = "found in one cluster alone";

// The parts of a note that have one of these words, joined again.
std::string NoteWith(const std::string& note, std::string_view words) {
  std::string kept;
  for (size_t from = 0; from < note.size();) {
    const size_t to = std::min(note.find("; ", from), note.size());
    const std::string part = note.substr(from, to - from);
    if (part.find(words) != std::string::npos) kept += (kept.empty() ? "" : "; ") + part;
    from = to + 2;
  }
  return kept;
}

bool IsNumber(const ModelColumn& column) {
  return column.kind == ColumnKind::kNumber &&
         (column.role == ColumnRole::kResponse || column.role == ColumnRole::kPredictor ||
          column.role == ColumnRole::kExposure);
}

// How many of so many rows have the larger of a number's two values; NaN where it has more values.
double RowsOfLarger(const ModelColumn& column, std::int64_t rows) {
  const auto n = static_cast<double>(rows);
  const double range = column.observed_high - column.observed_low;
  if (!(range > 0)) return kNaN;
  const double share = (column.mean - column.observed_low) / range;
  // Of values within a range the variance is largest when all lie at its ends.
  const double variance = column.sd / range * (column.sd / range) * (n - 1) / n;
  constexpr double kRounding = 1e-9;
  return std::abs(variance - share * (1 - share)) <= kRounding ? std::nearbyint(n * share) : kNaN;
}

class Releaser {
 public:
  Releaser(const Model& model, std::int64_t floor)
      : old_(model), floor_(std::max(floor, model.release_floor)), places_(model.columns.size()) {}

  Model Make() {
    Begin();
    if (old_.refused()) {
      out_.reason = ScrubbedReason(old_.reason);
      WithoutRows();
    } else if (std::string why = Fill(); !why.empty()) {
      Begin();
      out_.reason = "not released: " + why;
      WithoutRows();
    }
    WithoutKeys();
    return std::move(out_);
  }

 private:
  std::string Few() const { return "fewer than " + Counted(floor_, "row"); }

  void Begin() {
    out_ = old_.Unfitted();
    out_.release_floor = floor_;
    out_.rows.offered =
        SumOfRows(old_.rows.fitted, RoundedUp(old_.rows.offered - old_.rows.fitted, floor_));
    out_.rows.with_gaps = RoundedUp(old_.rows.with_gaps, floor_);
    out_.rows.outside = RoundedUp(old_.rows.outside, floor_);
    for (ModelColumn& column : out_.columns) {
      column.missing = RoundedUp(column.missing, floor_);
      column.outside = RoundedUp(column.outside, floor_);
      column.note = NoteWith(column.note, kEstimated);
    }
  }

  // Of a model without a fit: what it was to be of, and no count.
  void WithoutRows() {
    out_.rows = {};
    for (size_t c = 0; c < out_.columns.size(); ++c) {
      ModelColumn& column = out_.columns[c];
      for (double* value :
           {&column.observed_low, &column.lower_quartile, &column.median, &column.upper_quartile,
            &column.observed_high, &column.mean, &column.sd})
        *value = kNaN;
      column.levels.clear();
      column.reference = column.merged = -1;
      column.missing = column.outside = 0;
      column.note.clear();
      // A column with a note may have arguments that its rows decided.
      if (!old_.columns[c].note.empty()) column.transform = Transform();
    }
  }

  // Reasons name values, levels and counts.
  static std::string ScrubbedReason(const std::string& reason) {
    const auto has = [&](std::string_view words) {
      return reason.find(words) != std::string::npos;
    };
    if (reason == "no rows" || has("rescale them") || reason.starts_with("not released: "))
      return reason;
    if (reason.starts_with("no complete rows")) return "no complete rows";
    if (reason.starts_with("no complete row has the reference level"))
      return "no complete row has the reference level of a category";
    if (has("levels")) return "a category has too many levels";
    if (has("terms; a model takes at most")) return "has too many terms";
    if (reason.starts_with("needs ")) return "too few rows";
    if (has("cannot be estimated")) return "a re-expression cannot be estimated";
    return "for a reason that tells of rows; the full model has it";
  }

  // Everything of a fitted model but keys; the reason why it cannot be released, or nothing.
  std::string Fill() {
    if (std::string why = TellsOfRows(); !why.empty()) return why;
    for (size_t c = 0; c < old_.columns.size(); ++c) {
      if (std::string why = ReleaseColumn(c); !why.empty()) return why;
    }
    out_.clusters = old_.clusters;
    out_.terms = merged_ ? MakeTerms(out_.columns, out_.intercept) : old_.terms;
    out_.facts = old_.facts;
    if (std::string why = Refit(); !why.empty()) return why;
    if (std::string why = FewInProducts(); !why.empty()) return why;
    if (std::string why = SingleRows(); !why.empty()) return why;
    const double leverage = old_.basis.largest_leverage;
    out_.basis.largest_leverage = Coarse(leverage, leverage, kSingleDigits, Towards::kUp);
    double& middle = out_.facts.median_absolute_error;  // the error of one row, or halfway of two
    middle = Coarse(middle, middle, kMedianDigits, Towards::kNearest);
    const double size = ResidualSize();
    out_.residuals = CoarseResiduals(Scaled(old_.residuals, size), old_.rows.fitted, floor_);
    out_.smearing = CoarseSmearing(ScaledSmearing(old_.smearing, size), old_.rows.fitted, floor_);
    if (!MeansHold()) out_.smearing.points.clear();
    out_.response_histogram.original = CoarseBins(old_.response_histogram.original, floor_);
    if (std::vector<HistogramBin>& bins = out_.response_histogram.original; !bins.empty()) {
      bins.front().low = std::min(bins.front().low, out_.response().observed_low);
      bins.back().high = std::max(bins.back().high, out_.response().observed_high);
    }
    out_.response_histogram.scaled = CoarseBins(old_.response_histogram.scaled, floor_);
    if (!old_.checks.empty()) out_.checks = ReleasedChecks(old_, out_, merged_);
    // What a collinear column repeats may be a figure of few rows.
    for (ModelTerm& term : out_.terms) term.repeats.clear();
    return "";
  }

  // The residuals of the fit with merged levels, as a multiple of those of the full one. What is
  // told of them is brought to that size: the difference of the two sums of squares is how far the
  // levels lie apart that were put together, and may be a single row's value.
  double ResidualSize() const {
    const auto sum = [](const ModelFacts& facts) {
      return facts.residual_sd * facts.residual_sd * facts.residual_df;
    };
    const double size = std::sqrt(sum(out_.facts) / sum(old_.facts));
    return merged_ && std::isfinite(size) ? size : 1;
  }

  static ModelResiduals Scaled(ModelResiduals residuals, double size) {
    for (double& quantile : residuals.quantiles) quantile *= size;
    for (ResidualBin& bin : residuals.bins) {
      bin.mean *= size;
      bin.sd *= size;
    }
    return residuals;
  }

  // Whether means in original units survive that points of few rows were put together: where the
  // way back is steep, few rows make up most of them.
  bool MeansHold() const {
    constexpr double kDrift = 0.01;
    const Transform& transform = old_.response().transform;
    for (const ResidualBin& bin : old_.residuals.bins) {
      const double fit = (bin.fitted_low + bin.fitted_high) / 2;
      const double mean = SmearedMean(old_.smearing, transform, fit);
      const double drift = SmearedMean(out_.smearing, transform, fit) - mean;
      if (std::isfinite(mean) && !(std::abs(drift) <= kDrift * std::abs(mean))) return false;
    }
    return true;
  }

  // Whether the fit is of few rows by its making.
  std::string TellsOfRows() const {
    if (old_.rows.fitted < floor_) return Few() + " were fitted";
    if (old_.facts.residual_df < static_cast<double>(floor_))
      return "it has " + Few() + " more than terms, and would repeat single ones";
    for (const ModelColumn& column : old_.columns) {
      if (IsNumber(column) && column.note.find(kByRange) != std::string::npos) {
        return "rescale holds the least and the largest " + column.name +
               "; write rounded ones in the label";
      }
      if (!IsNumber(column) && column.kind != ColumnKind::kPolynomial) continue;
      const double larger = RowsOfLarger(column, old_.rows.fitted);
      if (std::min(larger, static_cast<double>(old_.rows.fitted) - larger) <
          static_cast<double>(floor_))
        return "one of the two values of " + column.name + " has " + Few();
    }
    return Dominated();
  }

  // Whether one row makes up most of a column, so that its value follows from the sums. A model
  // for release passed on its exact figures.
  std::string Dominated() const {
    if (old_.for_release()) return "";
    const auto n = static_cast<double>(old_.rows.fitted);
    for (const ModelColumn& column : old_.columns) {
      if (column.role == ColumnRole::kWeight && column.observed_high > kDominant * n * column.mean)
        return "one row has more than half of the sum of " + column.name;
      if (!IsNumber(column) && column.kind != ColumnKind::kPolynomial) continue;
      const double furthest =
          std::max(column.observed_high - column.mean, column.mean - column.observed_low) /
          column.sd;
      if (furthest * furthest > kDominant * (n - 1))
        return "one row has more than half of the sum of squares of " + column.name +
               " about its mean";
    }
    return "";
  }

  std::string ReleaseColumn(size_t c) {
    ModelColumn& column = out_.columns[c];
    if (column.kind == ColumnKind::kCategory) {
      std::optional<MergedLevels> levels = MergeLevels(column, floor_);
      if (!levels) return "all levels of " + column.name + " together would be one";
      if (levels->column.levels.size() == column.levels.size()) return "";
      merged_ = true;
      places_[c] = std::move(levels->place);
      column = std::move(levels->column);
      return "";
    }
    // Two values that enough rows have each are no secret of one.
    if (IsNumber(column) && !std::isnan(RowsOfLarger(column, old_.rows.fitted))) return "";
    const double low = column.observed_low, high = column.observed_high;
    if (!old_.for_release()) CoarsenRange(column);
    ranged_ = ranged_ || (column.kind == ColumnKind::kPolynomial &&
                          (column.observed_low != low || column.observed_high != high));
    return "";
  }

  // First the levels are put together, with figures as a refit of the rows would have them, then
  // polynomials are written over their rounded ranges.
  std::string Refit() {
    Model exact;  // as far as MapTerms reads it
    exact.intercept = old_.intercept;
    exact.columns = out_.columns;
    for (size_t c = 0; c < old_.columns.size(); ++c) {
      if (old_.columns[c].kind != ColumnKind::kPolynomial) continue;
      exact.columns[c].observed_low = old_.columns[c].observed_low;
      exact.columns[c].observed_high = old_.columns[c].observed_high;
    }
    out_.basis.fit = old_.basis.fit;
    out_.basis.robust = old_.basis.robust;
    if (!merged_) out_.tests = old_.tests;
    if (merged_) {
      const std::string why =
          Restricted(old_, exact.columns, places_,
                     [&](const RestrictedFit& fit) { SetMergedFigures(fit, exact.columns); });
      if (!why.empty()) return why;
    }
    if (std::string why = FewAtEnds(); !why.empty()) return why;
    if (!ranged_) return "";
    exact.terms = out_.terms;
    const std::vector<Index> kept = out_.basis.fit.kept;
    const std::vector<std::vector<int>> in_place(old_.columns.size());
    std::string why = Restricted(exact, out_.columns, in_place, [](const RestrictedFit&) {});
    if (why.empty() && out_.basis.fit.kept != kept)
      why = "its terms are too nearly collinear to be written over a rounded range";
    return why;
  }

  // Takes the basis from one set of columns to another, and calls `then` with the new fit.
  template <class Then>
  std::string Restricted(const Model& from, std::span<const ModelColumn> columns,
                         std::span<const std::vector<int>> places, Then&& then) {
    const Result<TermMap> map = MapTerms(from, columns, places, out_.terms);
    if (!map.ok()) return map.error();
    const bool repeats = std::any_of(from.terms.begin(), from.terms.end(),
                                     [](const ModelTerm& term) { return !term.repeats.empty(); });
    const RestrictedFit fit =
        Restrict(out_.basis.fit, map.value(), repeats ? kRoundingOfRepeats : 0);
    if (!IsFinite(fit)) return "its numbers are too large or too small";
    if (out_.basis.robust) {
      const double s = old_.facts.residual_sd;
      out_.basis.robust = Restrict(*out_.basis.robust, fit, merged_ ? s * s : kNaN);
    }
    out_.basis.fit = fit.basis;
    for (const DroppedColumn& gone : fit.dropped)
      out_.terms[static_cast<size_t>(gone.column)].repeats = gone.repeats;
    then(fit);
    return "";
  }

  static bool IsFinite(const RestrictedFit& fit) {
    const auto finite = [](const DoubleDouble& x) { return std::isfinite(x.value()); };
    const std::vector<DoubleDouble>& factor = fit.basis.factor;
    bool rises = true;
    for (Index j = 0; j < fit.basis.rank(); ++j)
      rises = rises && factor[static_cast<size_t>(PackedIndex(j, j))].hi > 0;
    return rises && std::isfinite(fit.added_ss) &&
           std::all_of(factor.begin(), factor.end(), finite) &&
           std::all_of(fit.basis.coefficient.begin(), fit.basis.coefficient.end(), finite);
  }

  // The fit of which the restriction is one, as FactsOf and JointTests read it.
  LeastSquares MergedFit(const RestrictedFit& fit) const {
    const ModelFacts& facts = old_.facts;
    const auto rows = static_cast<double>(old_.rows.fitted);
    const double residual_ss = facts.residual_df * facts.residual_sd * facts.residual_sd;
    LeastSquares merged;
    merged.basis = fit.basis;
    merged.rows = old_.rows.fitted;
    merged.effect = fit.effect;
    merged.residual_ss = residual_ss + fit.added_ss;
    const bool was_exact = std::isnan(facts.log_likelihood);
    merged.exact = was_exact && fit.added_ss <= residual_ss;
    merged.flat_response = std::isnan(facts.r_squared);
    merged.total_ss = merged.residual_ss;
    for (size_t i = old_.intercept ? 1 : 0; i < fit.effect.size(); ++i)
      merged.total_ss += fit.effect[i] * fit.effect[i];
    // ½ Σ ln w is what the likelihood has beside its residuals.
    if (!was_exact && HasRole(ColumnRole::kWeight)) {
      merged.log_weight_sum = 2 * facts.log_likelihood +
                              rows * (Log(2 * std::numbers::pi) + Log(residual_ss / rows) + 1);
    }
    return merged;
  }

  bool HasRole(ColumnRole role) const {
    return std::any_of(old_.columns.begin(), old_.columns.end(),
                       [&](const ModelColumn& column) { return column.role == role; });
  }

  void SetMergedFigures(const RestrictedFit& restricted, std::span<const ModelColumn> columns) {
    const LeastSquares fit = MergedFit(restricted);
    const RawColumns raw = MakeRawColumns(columns, out_.terms, restricted.dropped);
    const std::vector<double> coefficients = RawCoefficients(fit.basis, raw);
    Covariance classical;
    classical.scale = fit.residual_ss / static_cast<double>(fit.residual_df());
    const auto set_errors = [&](ErrorKind kind, const Covariance& covariance) {
      const std::vector<double> errors = StandardErrors(fit.basis, covariance, raw);
      for (size_t j = 0; j < errors.size(); ++j)
        out_.terms[j].standard_error[static_cast<size_t>(kind)] = errors[j];
    };
    set_errors(ErrorKind::kClassical, classical);
    if (out_.basis.robust) set_errors(out_.errors, *out_.basis.robust);
    for (size_t j = 0; j < out_.terms.size(); ++j) {
      out_.terms[j].coefficient = coefficients[j];
      SetNote(out_.terms[j]);
    }
    const TermGroups groups = GroupTerms(out_);
    SetInflation(fit.basis, raw, groups, out_);
    for (const DroppedColumn& gone : restricted.dropped) {
      ModelTerm& term = out_.terms[static_cast<size_t>(gone.column)];
      term.variance_inflation = kNaN;
      term.note = gone.repeats.empty() ? kAlwaysZero : "left out: repeats other columns";
    }
    SetTests(fit, groups, out_);

    const ModelFacts& old = old_.facts;
    ModelFacts& facts = out_.facts;
    SetScaleFacts(fit, out_);
    facts.log_likelihood_original =
        facts.log_likelihood + (old.log_likelihood_original - old.log_likelihood);
    facts.aic_original = facts.aic + (old.aic_original - old.aic);
    facts.bic_original = facts.bic + (old.bic_original - old.bic);
    facts.press = facts.median_absolute_error = kNaN;
  }

  void SetNote(ModelTerm& term) const {
    const auto old = std::find_if(old_.terms.begin(), old_.terms.end(),
                                  [&](const ModelTerm& t) { return t.name == term.name; });
    if (old != old_.terms.end()) term.note = NoteWith(old->note, kOneCluster);
    if (std::any_of(term.factors.begin(), term.factors.end(), [&](const Factor& factor) {
          const ModelColumn& column = out_.columns[static_cast<size_t>(factor.column)];
          return factor.level >= 0 && factor.level == column.merged;
        }))
      term.note = "levels of few rows, put together for release" +
                  (out_.errors == ErrorKind::kClassical
                       ? std::string()
                       : "; " + std::string(kErrorKindNames[static_cast<size_t>(out_.errors)]) +
                             " errors are those within these levels, too small where they differ");
  }

  // Whether the level that a category's terms leave out was put together with others, which gives
  // its other terms a new meaning.
  bool LeftOutMerged(size_t c) const {
    if (places_[c].empty()) return false;
    const auto left_out = static_cast<size_t>(old_.columns[c].UsualLevel());
    return places_[c][left_out] == out_.columns[c].merged;
  }

  // Whether merging may have taken a term away, or changed what it stands for.
  bool MergesTouch(const ModelTerm& term) const {
    for (size_t c = 0; c < old_.columns.size(); ++c) {
      if (!LeftOutMerged(c)) continue;
      if (term.factors.empty()) return true;
      for (const Factor& factor : term.factors) {
        const auto f = static_cast<size_t>(factor.column);
        if (f == c || Multiplied(f, c)) return true;
      }
    }
    return std::any_of(term.factors.begin(), term.factors.end(), [&](const Factor& factor) {
      const auto f = static_cast<size_t>(factor.column);
      return factor.level >= 0 && !places_[f].empty() &&
             places_[f][static_cast<size_t>(factor.level)] == out_.columns[f].merged;
    });
  }

  bool Multiplied(size_t a, size_t b) const {
    const int x = static_cast<int>(a), y = static_cast<int>(b);
    return std::any_of(old_.columns.begin(), old_.columns.end(), [&](const ModelColumn& product) {
      return product.role == ColumnRole::kProduct &&
             ((product.parts[0] == x && product.parts[1] == y) ||
              (product.parts[0] == y && product.parts[1] == x));
    });
  }

  // What depends on a single row, merged levels apart.
  std::string SingleRows() const {
    for (const ModelTerm& term : old_.terms) {
      if (term.note.find(kOneRow) != std::string::npos && !MergesTouch(term))
        return "a term rests on one row";
    }
    if (!merged_ && old_.basis.largest_leverage > kDominant)
      return "a row decides more than half of its own fitted value";
    return "";
  }

  // Of m rows at one place none has a leverage above 1 / m. Of the fit with merged levels, over the
  // ranges observed.
  std::string FewAtEnds() const {
    if (floor_ <= old_.release_floor) return "";
    for (size_t c = 0; c < old_.columns.size(); ++c) {
      const ModelColumn& column = old_.columns[c];
      if (column.kind != ColumnKind::kPolynomial) continue;
      for (const double end : {column.observed_low, column.observed_high}) {
        constexpr double kRounding = 1e-9;
        if (LeverageAt(c, end) * static_cast<double>(floor_) > 1 + kRounding)
          return Few() + " stand at an end of " + column.name;
      }
    }
    return "";
  }

  // Where the polynomial c has the value x, and all other columns their means.
  double LeverageAt(size_t c, double x) const {
    const CentredBasis& fit = out_.basis.fit;
    const PolynomialBasis powers = BasisOf(old_.columns[c], old_.intercept);
    std::vector<double> row(out_.terms.size(), 0), coordinates(fit.kept.size());
    for (size_t k = 0; k < fit.kept.size(); ++k)
      row[static_cast<size_t>(fit.kept[k])] = fit.centre[k];
    if (fit.intercept) row[0] = 1;
    const auto is_power = [&](const Factor& factor) {
      return factor.column == static_cast<int>(c);
    };
    const std::vector<double> means = row;
    const auto value = [&](const Factor& factor) {
      if (is_power(factor)) return powers.Value(x, factor.power);
      for (size_t t = 0; t < out_.terms.size(); ++t) {
        const std::vector<Factor>& own = out_.terms[t].factors;
        if (own.size() == 1 && own[0].column == factor.column && own[0].level == factor.level &&
            own[0].power == factor.power)
          return means[t];
      }
      return 0.0;
    };
    for (size_t t = 0; t < out_.terms.size(); ++t) {
      const std::vector<Factor>& factors = out_.terms[t].factors;
      if (std::none_of(factors.begin(), factors.end(), is_power)) continue;
      row[t] = 1;
      for (const Factor& factor : factors) row[t] *= value(factor);
    }
    Coordinates(fit, row, coordinates);
    double leverage = 0;
    for (const double a : coordinates) leverage += a * a;
    return leverage;
  }

  // Rows in the cells of products of categories, and of categories with numbers of two values.
  std::string FewInProducts() const {
    for (const ModelColumn& product : out_.columns) {
      if (product.role != ColumnRole::kProduct) continue;
      const auto a = static_cast<size_t>(product.parts[0]),
                 b = static_cast<size_t>(product.parts[1]);
      if (!HasTwoWays(a) || !HasTwoWays(b)) continue;
      const std::string names = out_.columns[a].name + " and " + out_.columns[b].name;
      if (HasRole(ColumnRole::kWeight))
        return "how many rows " + names + " share cannot be counted under weights";
      const std::optional<std::vector<std::vector<double>>> cells = CellsOf(a, b);
      if (!cells) return "how many rows " + names + " share cannot be counted";
      for (const std::vector<double>& row : *cells) {
        for (const double rows : row) {
          if (rows > 0.5 && rows < static_cast<double>(floor_) - 0.5)
            return "a cell of " + names + " has " + Few();
        }
      }
    }
    return "";
  }

  bool HasTwoWays(size_t c) const {
    const ModelColumn& column = old_.columns[c];
    return column.kind == ColumnKind::kCategory ||
           (IsNumber(column) && !std::isnan(RowsOfLarger(column, old_.rows.fitted)));
  }

  // Rows by level (or value, the larger last) of both; nullopt where the triangle does not tell.
  std::optional<std::vector<std::vector<double>>> CellsOf(size_t a, size_t b) const {
    const auto margin = [&](size_t c) {
      const ModelColumn& column = out_.columns[c];
      std::vector<double> rows;
      for (const CategoryLevel& level : column.levels)
        rows.push_back(static_cast<double>(level.rows));
      if (rows.empty()) {
        const double larger = RowsOfLarger(old_.columns[c], old_.rows.fitted);
        rows = {static_cast<double>(old_.rows.fitted) - larger, larger};
      }
      return rows;
    };
    const auto left_out = [&](size_t c) {
      return out_.columns[c].levels.empty() ? 0 : out_.columns[c].UsualLevel();
    };
    const std::vector<double> rows = margin(a), columns = margin(b);
    std::vector<std::vector<double>> cells(rows.size(), std::vector<double>(columns.size(), 0));
    for (size_t t = 0; t < out_.terms.size(); ++t) {
      const std::vector<Factor>& factors = out_.terms[t].factors;
      if (factors.size() != 2 || factors[0].column != static_cast<int>(a) ||
          factors[1].column != static_cast<int>(b))
        continue;
      const auto way = [](const Factor& factor) {
        return static_cast<size_t>(factor.level < 0 ? 1 : factor.level);
      };
      const std::optional<double> count = RowsOf(t, factors);
      if (!count) return std::nullopt;
      cells[way(factors[0])][way(factors[1])] = *count;
    }
    const auto u = static_cast<size_t>(left_out(a)), v = static_cast<size_t>(left_out(b));
    for (size_t i = 0; i < rows.size(); ++i) {
      cells[i][v] = rows[i];
      for (size_t j = 0; j < columns.size(); ++j)
        if (j != v) cells[i][v] -= cells[i][j];
    }
    for (size_t j = 0; j < columns.size(); ++j) {
      cells[u][j] = columns[j];
      for (size_t i = 0; i < rows.size(); ++i)
        if (i != u) cells[u][j] -= cells[i][j];
    }
    return cells;
  }

  // Rows in which a product of indicators, or of numbers of two values taken as such, is not 0.
  std::optional<double> RowsOf(size_t t, const std::vector<Factor>& factors) const {
    const CentredBasis& fit = out_.basis.fit;
    const auto kept = std::lower_bound(fit.kept.begin(), fit.kept.end(), static_cast<Index>(t));
    if (kept == fit.kept.end() || *kept != static_cast<Index>(t)) {
      return out_.terms[t].note == kAlwaysZero ? 0.0 : std::optional<double>();
    }
    for (const Factor& factor : factors) {
      const ModelColumn& column = old_.columns[static_cast<size_t>(factor.column)];
      const bool indicator =
          factor.level >= 0 || (column.transform == Transform() && column.observed_low == 0 &&
                                column.observed_high == 1);
      if (!indicator) return std::nullopt;
    }
    // The sum of squares of a column of zeros and ones.
    const Index k = kept - fit.kept.begin();
    double squares = 0;
    for (Index i = 0; i <= k; ++i) {
      double r = fit.factor[static_cast<size_t>(PackedIndex(i, k))].value();
      if (i == 0 && fit.intercept) r += fit.centre[static_cast<size_t>(k)] * fit.factor[0].value();
      squares += r * r;
    }
    return std::nearbyint(squares);
  }

  // Takes out the columns of keys, and counts the others anew.
  void WithoutKeys() {
    std::vector<int> place;
    std::vector<ModelColumn> kept;
    for (ModelColumn& column : out_.columns) {
      place.push_back(static_cast<int>(kept.size()));
      if (column.role != ColumnRole::kKey) kept.push_back(std::move(column));
    }
    const auto move = [&](int& column) { column = place[static_cast<size_t>(column)]; };
    for (ModelColumn& column : kept) {
      if (column.role == ColumnRole::kProduct)
        std::for_each(column.parts.begin(), column.parts.end(), move);
    }
    out_.columns = std::move(kept);
    for (ModelTerm& term : out_.terms)
      for (Factor& factor : term.factors) move(factor.column);
    for (ColumnTest& test : out_.tests) move(test.column);
  }

  const Model& old_;
  std::int64_t floor_;
  std::vector<std::vector<int>> places_;  // by column: the new level of each; empty: none merged
  bool merged_ = false, ranged_ = false;
  Model out_;
};

}  // namespace

Model ReleaseOf(const Model& model, std::int64_t floor) { return Releaser(model, floor).Make(); }

}  // namespace ladderline
