// A model as JSON text: what ols_model returns, what tables keep, and what every function that
// asks about a model reads back. This comment is the format's documentation, version 1.
//
// Rules. A number that is not available (NaN) is null. Keys whose value is the default given below,
// and figures that follow from others of the text, are left out: the text is kept short, because
// the host copies it for every row of a join. Numbers read back to the same double, but for those
// said to be rounded. `packed` numbers are base64 text (ext/packed_numbers.h). Indices count from
// 0; `columns` and `terms` are referred to by index. Unknown and repeated keys are errors.
//
//   ladderline_model  1, the version of the format; first key
//   status            fitted or refused
//   reason            why it was refused; only then. A refused model has neither terms nor what
//                     follows from them
//   release_floor     of a model for release (core/release/release.h): groups of fewer rows are not
//                     told; it has no influence and no digest (0: any other model)
//   family            ols
//   name              of the model, from the option `name` (none)
//   intercept         whether there is one (true)
//   errors            classical, hc0 … hc3, cluster: the model's own kind (classical)
//   level             of limits, between 0 and 1 (0.95)
//   clusters          that the fitted rows fall into (0: there is no cluster column)
//   rows              {offered, fitted, with_gaps, outside}: counts of rows. with_gaps: a used
//   value
//                     is missing; outside: one lies outside its domain; a row may be both (0)
//   columns           the labelled columns, the response first:
//     name
//     unit            (none)
//     role            response, predictor, weight, exposure, cluster, key, order, present, product
//                     (predictor)
//     kind            number, category, polynomial, text (number)
//     transform       a spec, `log_offset 1` (identity); raw values are stored, models apply it
//     degree          of a polynomial
//     parts           of a product: the two columns that are multiplied
//     values          of the raw values in the fitted rows, days for date_days: [least, lower
//                     quartile, median, upper quartile, largest, mean, sd], unweighted
//     levels          of a category: [[text, rows], …] in byte order
//     reference       index into levels (none: every level has its term)
//     reference_given whether the label named it (false: the commonest level)
//     merged          index of the level that stands for those of few rows in a model for release
//                     (none)
//     missing         rows in which this column's value is missing (0)
//     outside         rows in which it lies outside its domain (0)
//     note            (none)
//   terms             the coefficients as people read them, the intercept first:
//     name            `intercept`, `age`, `trade is Damp`, `age power 2`, `age by units`
//     factors         what is multiplied, two of a product: [column, power] for a column's
//                     transformed value (power 1) or a power of a polynomial, [column, 0, level]
//                     for the 0/1 indicator of a level (the column that has the term's name; of the
//                     intercept nothing)
//     coefficient     null: a column left out as collinear, see note
//     standard_error  classical; then hc0, hc1, hc2, hc3, cluster: those of the other kinds,
//                     rounded to 14 digits
//     variance_inflation  of a term with a power of a polynomial (none); the others stand in
//                     tests
//     note            (none)
//     repeats         of a column left out: what it is in the columns of the basis that are kept,
//                     [[term, factor], …] (none: always 0, or not known)
//   facts             residual_df, residual_sd, median_absolute_error (original units), r_squared,
//                     log_likelihood_original, press; and adjusted_r_squared, f_df1, f_df2, f, f_p,
//                     log_likelihood, aic, bic, aic_original, bic_original where they do not follow
//                     by their definitions
//   tests             per column its joint test and its variance inflation: [column, parameters,
//                     variance_inflation, sum_of_squares, f, p_value]; the last three left out
//                     where they follow from the t of a single coefficient
//   checks_wanted     option `checks` (true)
//   checks            [{name, status, statistic, df, p_value, finding, remedy}, …]; status is fine,
//                     look, problem or `not computed`
//   response_histogram  counts of the fitted rows by response, weights left aside (none: checks are
//                     not wanted, fewer than 10 rows, or a text older than this key):
//     original        {edges, rows}: bin i from edges[i] up to, not with, edges[i + 1] has rows[i];
//                     the last bin with its end. Raw values, days for date_days. A constant
//                     response is one bin from the value to itself
//     scaled          the same on the transformed scale, for a response with a transform
//   residuals         on the transformed scale, of rows scaled by the root of their weight:
//     quantiles       at 0, .01, .05, .1, .25, .5, .75, .9, .95, .99, 1; rounded to 9 digits; null
//                     in a model for release where few rows lie beyond
//     fitted          [least, largest] fitted value
//     bins            of equal widths between these: [rows, mean, sd] of the residuals; rounded to
//     7
//   smearing          how fitted values become means in original units; core/model/smearing.h
//     kind            none, factor, hyperbolic, moments, points (none)
//     values          numbers, by kind
//     points          packed
//   influence         rows with the largest Cook's distance: [key, leverage, studentized_residual],
//                     rounded to 11 digits, and the distance where it does not follow from these;
//                     key is null, an integer, a real or text
//   basis             the fit in its own coordinates; core/regression/centred_basis.h. The terms
//                     kept are the intercept and those that have a coefficient
//     centre          packed: per kept term, what its column is measured from; 0 for the intercept
//     origin          with an intercept: the fit where every column is at its centre, as a double
//                     and what that leaves of it. The other coefficients are those of the terms
//     slope           packed: these coefficients, if there is a polynomial, whose powers stand for
//                     the columns of core/model/polynomial_basis.h over the column's values
//     slope_low       packed: what a double leaves of these (zeros)
//     factor          packed: upper triangle R column by column, its diagonal above 0;
//                     R'R = Σ w d d'
//     factor_low      packed: what doubles leave of R, where it was computed beyond them
//     robust          covariance under the model's own errors where these are not classical:
//                     {scale, exponent (variances are 4^exponent of what the others give; 0),
//                     matrix (packed as factor; left out: the unit matrix), unknown (packed
//                     directions whose variance no row tells; none)}
//     largest_leverage  among fitted rows, each as for a case of weight 1
//   digest            of key, raw response and weight of the fitted rows, whatever their order: 32
//                     hexadecimal digits
#ifndef LADDERLINE_EXT_MODEL_TEXT_H_
#define LADDERLINE_EXT_MODEL_TEXT_H_

#include <string>
#include <string_view>

#include "core/model/model.h"
#include "core/support/result.h"

namespace ladderline {

std::string ModelText(const Model& model);

// Takes back what ModelText wrote, whitespace and order of keys aside, and nothing else: types,
// words, ranges, sizes and references between the parts are all checked, so that whoever holds a
// Model may rely on them. The error says what is wrong and where: `columns[2].transform …`.
//   cost  about 20 ns per byte
Result<Model> ModelFromText(std::string_view text);

}  // namespace ladderline

#endif  // LADDERLINE_EXT_MODEL_TEXT_H_
