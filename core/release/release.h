// A model as it may leave the office: without single rows, and with no group of fewer rows than a
// floor that the office's rules name.
//
//   gone       the key column, the influential rows, the digest; keys and single rows in findings;
//              notes on columns that count rows, all but what was estimated
//   levels     of fewer rows than the floor stand together (merged_levels.h). The fit is then that
//              of a refit with these levels put together (restricted_fit.h): coefficients,
//              classical errors, residual_sd, R², F, likelihoods, joint tests and variance
//              inflation are exact. Errors of the model's own other kind follow by the linear map
//              from those of the full fit, whose residuals they keep; all other kinds are NaN, as
//              are press and median_absolute_error. Of the checks those that need no row are made
//              anew, those of single rows are not computed. Residual summary and smearing are
//              those of the full fit, brought to the size of the new residuals; what other checks
//              found in the residuals stays, to 3 digits
//   rounded    ranges outwards to 2 digits and 1/20 of themselves or more, quartiles, means and
//              sds of columns to 3 digits (coarse.h), and so is median_absolute_error;
//              polynomials are written over the new range. Counts of rows left out, missing and
//              outside, to the next multiple of the floor
//   coarse     residual quantiles beyond which fewer rows lie than the floor are NaN; bins and
//              smearing points of fewer rows are put together; where that moves a mean in original
//              units by more than 1%, there is none
//   refused    fits that tell of single rows by their making, with the reason in words: fewer rows
//              fitted, or fewer more than terms, than the floor; a category left with one level; a
//              number with two values of which one stands for fewer rows, a polynomial at an end of
//              which fewer stand (the leverage there, all else at its mean, is above 1 / floor), or
//              a product with cells of fewer; terms that rest on one row; a row with more than half
//              of its own fitted value (leverage above 1/2; not judged where levels were merged),
//              of the weights, or of the sum of squares of a number about its mean; `rescale` by
//              the range observed; terms that cannot be put together (term_map.h). A refused model
//              loses what its reason says of rows
//   predictions  of a level that was merged: none, since the text does not know its name; they are
//              for the text of the level that it went to, and notes name that one
//   not hidden  sums over all rows, over a level, and over what two columns share: the triangle has
//              the cross-products of the columns, and so how many rows have two levels of different
//              categories, be they few. Other releases, of other months or with another floor, can
//              be subtracted from this one: the sums of all rows less those of their parts
//              (districts) are those of a part that was withheld, to the single record. There,
//              local rules decide
// That a row must not have more than half is a rule of our own judgement, of the kind of p% rules
// for tables: a row with less may still be guessed at. "Exact" holds for well-conditioned fits;
// polynomials far from 0 without an intercept may keep or drop other terms than a refit.
#ifndef LADDERLINE_CORE_RELEASE_RELEASE_H_
#define LADDERLINE_CORE_RELEASE_RELEASE_H_

#include <cstdint>

#include "core/model/model.h"

namespace ladderline {

// `floor` >= 1. A model for release can be released again; the higher floor holds.
Model ReleaseOf(const Model& model, std::int64_t floor);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RELEASE_RELEASE_H_
