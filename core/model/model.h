// A fitted (or refused) model as a value: all that later questions about it need, and no rows.
//
// Everything that speaks of a model (its text, terms, facts, predictions, notes) reads this struct.
// A NaN is "not available" and is shown as NULL. Indices are 0-based.
//
// Two descriptions of the fit live side by side: `terms` holds the coefficients as people read
// them, `basis` the same fit on centred columns, from which everything else is computed.
#ifndef LADDERLINE_CORE_MODEL_MODEL_H_
#define LADDERLINE_CORE_MODEL_MODEL_H_

#include <algorithm>
#include <array>
#include <cstdint>
#include <limits>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "core/model/response_histogram.h"
#include "core/model/smearing.h"
#include "core/regression/centred_basis.h"
#include "core/regression/covariance.h"
#include "core/regression/least_squares.h"
#include "core/transform/transform.h"

namespace ladderline {

inline constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// The version of the model's text; readers refuse any other.
inline constexpr int kModelVersion = 1;

enum class ColumnRole {
  kResponse,
  kPredictor,
  kWeight,
  kExposure,
  kCluster,
  kKey,
  kOrder,
  kPresent,
  kProduct
};
inline constexpr std::array<std::string_view, 9> kColumnRoleNames = {
    "response", "predictor", "weight", "exposure", "cluster", "key", "order", "present", "product"};

enum class ColumnKind { kNumber, kCategory, kPolynomial, kText };
inline constexpr std::array<std::string_view, 4> kColumnKindNames = {"number", "category",
                                                                     "polynomial", "text"};

struct CategoryLevel {
  std::string text = {};
  std::int64_t rows = 0;  // fitted rows with this level
};

struct ModelColumn {
  std::string name = {};
  std::string unit = {};  // empty: none given
  ColumnRole role = ColumnRole::kPredictor;
  ColumnKind kind = ColumnKind::kNumber;
  Transform transform;
  int degree = 0;                       // kPolynomial
  std::array<int, 2> parts = {-1, -1};  // kProduct: the columns that are multiplied
  // Of the raw values in the fitted rows, unweighted; NaN where the kind has none.
  double observed_low = kNaN, observed_high = kNaN;
  double lower_quartile = kNaN, median = kNaN, upper_quartile = kNaN;
  double mean = kNaN, sd = kNaN;
  std::vector<CategoryLevel> levels = {};  // kCategory: in byte order
  int reference = -1;            // index into levels; -1: none (no intercept, first category)
  bool reference_given = false;  // given in the label, rather than the commonest level
  int merged = -1;  // index of the level that stands for those of few rows (release.h); −1: none
  std::int64_t missing = 0;  // rows in which this column's value is missing
  std::int64_t outside = 0;  // rows in which it lies outside its transform's domain
  std::string note = {};

  // The reference of a category, and where it has none the commonest level (the first of several):
  // what products leave out and effects hold still.
  int UsualLevel() const {
    if (reference >= 0) return reference;
    const auto commonest = std::max_element(
        levels.begin(), levels.end(),
        [](const CategoryLevel& a, const CategoryLevel& b) { return a.rows < b.rows; });
    return static_cast<int>(commonest - levels.begin());
  }
  // Its raw values are days, which people read and write as dates.
  bool IsDate() const { return transform.kind() == TransformKind::kDateDays; }
  // Carries information of its own, so that a prediction needs its value.
  bool IsInput() const { return role == ColumnRole::kPredictor || role == ColumnRole::kExposure; }

  // The response in original units where the model's scale is at z, or NaN; `fit` is the fitted
  // value to which z belongs. See Transform::BackHeld and BackWithin.
  double BackHeld(double z, double fit) const {
    return transform.BackWithin(observed_low, observed_high, z, fit);
  }
};

// A factor of a term: a numeric column's transformed value, a power of a polynomial's value, or the
// 0/1 indicator of a level of a category.
struct Factor {
  int column = 0;
  int power = 1;   // used when level < 0; other than 1 for a kPolynomial only
  int level = -1;  // index into the column's levels
};

struct ModelTerm {
  // `intercept`, `age (years)` without its unit, `trade is Damp`, `age power 2`, `age by units`
  std::string name = {};
  std::vector<Factor> factors = {};  // none: the intercept
  double coefficient = kNaN;         // NaN: a collinear column, see note
  std::array<double, kErrorKinds> standard_error = {kNaN, kNaN, kNaN, kNaN, kNaN, kNaN};
  double variance_inflation = kNaN;
  std::string note = {};
  // Of a collinear column: what it is in those of `basis` that are kept (least_squares.h).
  std::vector<Repeat> repeats = {};
};

// The fit where evaluation, leverage and limits lose no digits. Column j of `fit` is term j: a row
// to ask about is written as its terms' products of factors (1 for the intercept), one number per
// term, uncentred; centred_basis.h gives estimate and coordinates. The k-th power of a polynomial
// is p_k here (polynomial_basis.h), so that its coefficients are other than those of the terms.
// Dropped terms are not in `fit.kept`.
struct Basis {
  CentredBasis fit;
  // Of the model's own errors where these are robust or of clusters; unset for classical ones,
  // which follow from residual_sd.
  std::optional<Covariance> robust;
  double largest_leverage = kNaN;  // among fitted rows, as for a case of weight 1
};

struct RowCounts {
  std::int64_t offered = 0, fitted = 0;
  std::int64_t with_gaps = 0;  // rows in which a used value is missing
  std::int64_t outside = 0;  // rows in which a value is outside its domain (may overlap with gaps)
};

struct ModelFacts {
  double residual_df = kNaN, residual_sd = kNaN;
  double median_absolute_error = kNaN;  // original units
  double r_squared = kNaN, adjusted_r_squared = kNaN;
  double f = kNaN, f_df1 = kNaN, f_df2 = kNaN, f_p = kNaN;
  double log_likelihood = kNaN, aic = kNaN, bic = kNaN;  // on the model's scale
  double log_likelihood_original = kNaN, aic_original = kNaN, bic_original = kNaN;
  double press = kNaN;
};

// Joint test that all terms of one column are 0 (classical partial F).
struct ColumnTest {
  int column = 0;
  int parameters = 0;
  double sum_of_squares = kNaN, f = kNaN, p_value = kNaN;
};

// The raw numbers of one column in rows that were left out although the column had one.
struct NumbersLeftOut {
  std::int64_t rows = 0;
  double mean = kNaN;
};

struct Check {
  std::string name = {}, status = {};  // fine, look, problem, not computed
  double statistic = kNaN, df = kNaN, p_value = kNaN;
  std::string finding = {}, remedy = {};
};

// Residuals on the transformed scale, of rows scaled by √weight.
inline constexpr std::array<double, 11> kResidualProbabilities = {0,    0.01, 0.05, 0.1,  0.25, 0.5,
                                                                  0.75, 0.9,  0.95, 0.99, 1};
struct ResidualBin {
  double fitted_low = kNaN, fitted_high = kNaN;  // on the transformed scale
  std::int64_t rows = 0;
  double mean = kNaN, sd = kNaN;  // of the residuals
};
struct ModelResiduals {
  std::vector<double> quantiles = {};  // at kResidualProbabilities; empty: not available
  std::vector<ResidualBin> bins = {};  // by fitted value, equal widths
};

using KeyValue = std::variant<std::monostate, std::int64_t, double, std::string>;
struct InfluentialCase {
  KeyValue key = {};  // of the key column; without one, the row's number among the rows offered
  double cooks_distance = kNaN, leverage = kNaN, studentized_residual = kNaN;
};

struct Model {
  std::string family = "ols";
  std::string name = {};           // option `name`; empty: none
  std::string reason = {};         // why it was refused; empty: fitted
  std::int64_t release_floor = 0;  // of a model made for release (release.h); 0: any other
  bool intercept = true;
  ErrorKind errors = ErrorKind::kClassical;
  double level = 0.95;
  std::int64_t clusters = 0;  // that the fitted rows fall into; 0: no cluster column
  RowCounts rows;
  std::vector<ModelColumn> columns = {};  // response first, then as labelled
  std::vector<ModelTerm> terms = {};
  ModelFacts facts;
  std::vector<ColumnTest> tests = {};
  bool checks_wanted = true;  // option checks
  std::vector<Check> checks = {};
  ResponseHistogram response_histogram;
  ModelResiduals residuals;
  Smearing smearing;
  std::vector<InfluentialCase> influence = {};  // largest Cook's distance first
  Basis basis;
  std::string digest = {};  // of the rows fitted, whatever their order: 32 hexadecimal digits

  bool refused() const { return !reason.empty(); }
  const ModelColumn& response() const { return columns.front(); }
  // What was asked for and of which rows, without what came of it.
  Model Unfitted() const {
    Model model;
    model.family = family;
    model.name = name;
    model.intercept = intercept;
    model.errors = errors;
    model.level = level;
    model.checks_wanted = checks_wanted;
    model.rows = rows;
    model.columns = columns;
    return model;
  }
  bool for_release() const { return release_floor > 0; }
  // Before a count of rows that were offered or left out, which a model for release rounds.
  const char* about() const { return for_release() ? "about " : ""; }
};

inline constexpr std::size_t kMostTerms = 1000;

// Whether a polynomial is among a term's factors.
inline bool HasPower(const ModelTerm& term, const std::vector<ModelColumn>& columns) {
  for (const Factor& factor : term.factors) {
    if (columns[static_cast<std::size_t>(factor.column)].kind == ColumnKind::kPolynomial)
      return true;
  }
  return false;
}

// The labelled column that a term belongs to: that of its factor, of two factors their product.
// −1: the intercept, or factors that no column multiplies.
inline int ColumnOf(const ModelTerm& term, const std::vector<ModelColumn>& columns) {
  if (term.factors.size() == 1) return term.factors[0].column;
  if (term.factors.size() != 2) return -1;
  const std::array<int, 2> parts = {term.factors[0].column, term.factors[1].column};
  for (std::size_t c = 0; c < columns.size(); ++c) {
    if (columns[c].role == ColumnRole::kProduct && columns[c].parts == parts)
      return static_cast<int>(c);
  }
  return -1;
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_MODEL_H_
