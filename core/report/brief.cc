#include "core/report/brief.h"

#include <algorithm>
#include <cmath>
#include <vector>

#include "core/checks/findings.h"
#include "core/effects/effects.h"
#include "core/effects/reading.h"
#include "core/effects/sentences.h"
#include "core/effects/wording.h"
#include "core/report/cautions.h"
#include "core/support/markup.h"
#include "core/support/prose.h"

namespace ladderline {
namespace {

// Products can have hundreds of contrasts: a page holds some.
constexpr size_t kMostProductLines = 8;

// Whether what starts at i would be made a link of without being marked as one.
bool StartsLink(std::string_view text, size_t i) {
  const std::string_view rest = text.substr(i);
  if (rest.starts_with("://")) return true;
  if (!rest.starts_with(".") || i < 3) return false;
  return std::all_of(text.begin() + static_cast<std::ptrdiff_t>(i - 3),
                     text.begin() + static_cast<std::ptrdiff_t>(i),
                     [](char c) { return c == 'w' || c == 'W'; });
}

bool IsWord(char c) {
  return ('a' <= c && c <= 'z') || ('A' <= c && c <= 'Z') || ('0' <= c && c <= '9');
}

// With a backslash before what Markdown would read as marks, entities or links.
std::string Escaped(const std::string& text) {
  std::string escaped;
  for (size_t i = 0; i < text.size(); ++i) {
    const char c = text[i];
    // An underscore inside a word is no mark.
    const bool inside =
        c == '_' && i > 0 && i + 1 < text.size() && IsWord(text[i - 1]) && IsWord(text[i + 1]);
    if (c == '\n' || c == '\r') {
      escaped += ' ';
      continue;
    }
    const bool mark = std::string_view("\\`*_[]<>#&~").find(c) != std::string_view::npos;
    if ((mark && !inside) || StartsLink(text, i)) escaped += '\\';
    escaped += c;
  }
  return escaped;
}

std::string WithUnit(const ModelColumn& column) {
  return column.unit.empty() ? column.name : column.name + " (" + column.unit + ")";
}

std::string Capital(std::string text) {
  if (!text.empty() && 'a' <= text[0] && text[0] <= 'z')
    text[0] = static_cast<char>(text[0] - 'a' + 'A');
  return text;
}

class Brief {
 public:
  explicit Brief(const Predictor& predictor)
      : predictor_(predictor),
        model_(predictor.model()),
        response_(model_.response()),
        unit_(ResponseUnit(model_)) {}

  std::vector<BriefBlock> Blocks() {
    Title();
    Fitted();
    LeftOut();
    Heading("What goes with " + response_.name);
    Effects();
    Heading("How close the fit comes");
    Closeness();
    Heading("What the checks found");
    Checks();
    Heading("To be shown with it");
    for (const std::string& caution : CautionsOf(model_)) Bullet(caution);
    return std::move(blocks_);
  }

 private:
  using Kind = BriefBlock::Kind;
  void Heading(std::string text) { blocks_.push_back({Kind::kHeading, std::move(text)}); }
  void Paragraph(std::string text) { blocks_.push_back({Kind::kParagraph, std::move(text)}); }
  void Bullet(std::string text) { blocks_.push_back({Kind::kBullet, std::move(text)}); }

  std::vector<const ModelColumn*> Predictors() const {
    std::vector<const ModelColumn*> predictors;
    for (const ModelColumn& column : model_.columns) {
      if (column.role == ColumnRole::kPredictor) predictors.push_back(&column);
    }
    return predictors;
  }

  void Title() {
    blocks_.push_back(
        {Kind::kTitle, Capital(model_.name.empty() ? WithUnit(response_) + ": a fit to " +
                                                         Counted(model_.rows.fitted, "case")
                                                   : model_.name)});
  }

  static std::string Entering(const ModelColumn& column) {
    if (column.kind == ColumnKind::kCategory) {
      std::string text = WithUnit(column) + " (" +
                         Counted(static_cast<std::int64_t>(column.levels.size()), "level");
      if (column.reference >= 0) {
        text += ", against " + column.levels[static_cast<size_t>(column.reference)].text +
                (column.reference_given ? "" : ", the commonest");
      }
      return text + ")";
    }
    std::string text = ScalePhrase(column);
    if (text == column.name) text = WithUnit(column);
    if (column.kind == ColumnKind::kPolynomial)
      text += " as a polynomial of degree " + std::to_string(column.degree);
    return text;
  }

  void Fitted() {
    std::vector<std::string> entering;
    for (const ModelColumn* column : Predictors()) entering.push_back(Entering(*column));
    for (const ModelColumn& column : model_.columns) {
      if (column.role != ColumnRole::kProduct) continue;
      const auto part = [&](size_t i) {
        return model_.columns[static_cast<size_t>(column.parts[i])].name;
      };
      entering.push_back("the product of " + part(0) + " and " + part(1));
    }
    std::string text = "A line was fitted to " + Entering(response_) + " in " +
                       Counted(model_.rows.fitted, "case") + " of " + model_.about() +
                       std::to_string(model_.rows.offered) + " offered";
    text += entering.empty() ? ", on nothing but its average." : ", on " + Listed(entering) + ".";
    for (const ModelColumn& column : model_.columns) {
      if (column.role == ColumnRole::kWeight) text += " Cases count by " + column.name + ".";
    }
    text += " Limits are at " + LevelPhrase(model_.level);
    if (model_.errors != ErrorKind::kClassical)
      text +=
          ", by " + std::string(kErrorKindNames[static_cast<size_t>(model_.errors)]) + " errors";
    if (model_.errors == ErrorKind::kCluster) {
      for (const ModelColumn& column : model_.columns) {
        if (column.role == ColumnRole::kCluster)
          text += " (" + std::to_string(model_.clusters) + " clusters by " + column.name + ")";
      }
    }
    Paragraph(text + ".");
  }

  void LeftOut() {
    const std::int64_t left_out = model_.rows.offered - model_.rows.fitted;
    if (left_out == 0) return Paragraph("No case was left out.");
    std::string text = "Left out: " + (model_.about() + Counted(left_out, "case")) + ", since " +
                       LeftOutPhrase(model_);
    Paragraph(text + ".");
  }

  void Effects() {
    const std::vector<Effect> effects = EffectsOf(predictor_, model_.level, model_.errors);
    size_t product_lines = 0;
    bool any = false;
    for (size_t i = 0; i < effects.size();) {
      const Effect& effect = effects[i];
      size_t end = i + 1;
      if (effect.kind == EffectKind::kLevel) {
        while (end < effects.size() && SameSet(effects[end], effect)) ++end;
      }
      // A page has room for one way of reading each place of a product.
      const bool told = effect.kind != EffectKind::kRuleOfThumb &&
                        !(effect.partner && effect.kind == EffectKind::kPercent);
      if (told && (!effect.partner || product_lines++ < kMostProductLines)) {
        Bullet(
            effect.kind == EffectKind::kLevel
                ? LevelsSentence(model_, {effects.data() + i, end - i}, model_.level, model_.errors)
                : EffectSentence(model_, effect, model_.level, model_.errors));
        any = true;
      }
      i = end;
    }
    if (product_lines > kMostProductLines)
      Bullet("The other contrasts of products are in model_effects.");
    if (!any) Paragraph("No other column was fitted.");
  }
  static bool SameSet(const Effect& a, const Effect& b) {
    const auto same_partner = [&] {
      if (a.partner.has_value() != b.partner.has_value()) return false;
      return !a.partner ||
             (a.partner->column == b.partner->column &&
              a.partner->place.level == b.partner->place.level &&
              (a.partner->place.level >= 0 || a.partner->place.number == b.partner->place.number));
    };
    return a.kind == b.kind && a.column == b.column && same_partner();
  }

  void Closeness() {
    const ModelFacts& facts = model_.facts;
    std::string text;
    if (!(facts.residual_df > 0)) {
      return Paragraph("There are as many terms as cases, so that closeness says nothing.");
    }
    if (std::isfinite(facts.median_absolute_error)) {
      text += "Half of the cases lie within " +
              DifferenceAmount(Rounded(facts.median_absolute_error, 3), unit_) +
              " of their fitted value";
      if (std::isfinite(response_.median)) {
        text += "; the median " + response_.name + " is " +
                (response_.IsDate() ? RawValueText(response_, response_.median)
                                    : Amount(Rounded(response_.median, 3), unit_));
      }
      text += ". ";
    }
    text += OneCase();
    if (!model_.intercept) {
      text +=
          "Without an intercept there is no share of the variation that would compare with other "
          "fits.";
    } else if (std::isfinite(facts.r_squared)) {
      text += "The columns go with " + Percent(facts.r_squared) + " of the variation of " +
              ScalePhrase(response_) + ".";
    }
    Paragraph(text);
  }

  // What one case may come to, where all columns are held.
  std::string OneCase() const {
    const PredictionRow row = Contrasts(predictor_, model_.errors).RowAt({});
    const Interval limits = predictor_.CaseLimits(row, model_.level);
    const double typical = predictor_.FittedTypical(row);
    if (!std::isfinite(limits.low) || !std::isfinite(limits.high) || !std::isfinite(typical))
      return "";
    const int place = RoundingPlace(limits.high - limits.low, typical);
    const bool date = response_.IsDate();
    const auto shown = [&](double value) {
      return date ? RawValueText(response_, value) : RoundedTo(value, place);
    };
    const auto amount = [&](double value) { return Amount(shown(value), date ? "" : unit_); };
    const bool straight = IsStraight(response_.transform);
    std::string middle = "a typical (middle) value of " + amount(typical);
    const double mean = predictor_.FittedMean(row);
    if (std::isfinite(mean)) middle += " and a mean of " + amount(mean);
    std::string below;
    if (!date && limits.low < 0 && response_.observed_low >= 0) {
      below = "No " + response_.name + " was below 0: for single cases " +
              (straight ? "the straight-line scale" : "this scale") + " is wrong. ";
    }
    const std::string places = HeldPlaces(model_, {});
    return "For a single case " + (places.empty() ? "" : "at the " + places + " of all columns ") +
           "the fit says " + (straight ? amount(typical) : middle) + ", and " +
           LevelPhrase(model_.level) + " of such cases should lie between " + shown(limits.low) +
           " and " + amount(limits.high) + ". " + below;
  }

  void Checks() {
    const std::vector<Check> checks = ShownChecks(model_);
    for (const char* status : {"problem", "look"}) {
      for (const Check& check : checks) {
        if (check.status != status) continue;
        std::string text = (check.status == "problem" ? "Problem (" : "To look at (") + check.name +
                           "): " + FindingWithoutKey(check);
        if (!check.remedy.empty()) text += " What to try: " + check.remedy;
        Bullet(text);
      }
    }
    std::vector<std::string> fine, skipped;
    for (const Check& check : checks) {
      if (check.status == "fine") fine.push_back(check.name);
      if (check.status == "not computed") skipped.push_back(check.name);
    }
    if (!fine.empty()) Bullet("Nothing found by " + Listed(fine) + ".");
    if (!skipped.empty()) Bullet("Not computed: " + Listed(skipped) + ".");
  }

  const Predictor& predictor_;
  const Model& model_;
  const ModelColumn& response_;
  std::string unit_;
  std::vector<BriefBlock> blocks_;
};

}  // namespace

std::vector<BriefBlock> BriefOf(const Predictor& predictor) { return Brief(predictor).Blocks(); }

std::vector<BriefBlock> BriefOfRefused(const Model& model) {
  std::string title = model.name;
  if (title.empty() && !model.columns.empty()) title = WithUnit(model.response());
  std::vector<BriefBlock> blocks;
  blocks.push_back({BriefBlock::Kind::kTitle, Capital(title.empty() ? "No fit" : title)});
  blocks.push_back({BriefBlock::Kind::kParagraph, "No fit was made: " + model.reason + "."});
  return blocks;
}

std::string BriefMarkdown(std::span<const BriefBlock> blocks) {
  std::string page;
  for (size_t i = 0; i < blocks.size(); ++i) {
    const std::string text = Escaped(blocks[i].text);
    switch (blocks[i].kind) {
      case BriefBlock::Kind::kTitle:
        page += "# " + text + "\n\n";
        break;
      case BriefBlock::Kind::kHeading:
        page += "\n## " + text + "\n\n";
        break;
      case BriefBlock::Kind::kParagraph:
        if (i > 0 && blocks[i - 1].kind == BriefBlock::Kind::kParagraph) page += "\n";
        page += text + "\n";
        break;
      case BriefBlock::Kind::kBullet:
        page += "- " + text + "\n";
    }
  }
  return page;
}

std::string BriefHtml(std::span<const BriefBlock> blocks) {
  std::string page;
  bool in_list = false;
  const auto element = [&](const char* name, const std::string& text) {
    page += std::string("<") + name + ">" + MarkupText(text) + "</" + name + ">\n";
  };
  for (const BriefBlock& block : blocks) {
    const bool bullet = block.kind == BriefBlock::Kind::kBullet;
    if (bullet != in_list) page += bullet ? "<ul>\n" : "</ul>\n";
    in_list = bullet;
    constexpr const char* kElements[] = {"h2", "h3", "p", "li"};
    element(kElements[static_cast<size_t>(block.kind)], block.text);
  }
  if (in_list) page += "</ul>\n";
  return page;
}

}  // namespace ladderline
